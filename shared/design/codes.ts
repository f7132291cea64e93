import type { Converter } from './schema.ts'

/**
 * Code that the firmware sees for a voltage y: clamp(floor((y − low)/(high − low)·2^N + ½), 0, 2^N − 1), then the
 * converter's coding (straight and offset binary count from 0; twos complement from −2^(N−1)).
 */
export function toCode(converter: Pick<Converter, 'input' | 'bits' | 'coding'>, y: number): number {
  const steps = 2 ** converter.bits
  const { low, high } = converter.input
  const straight = Math.min(Math.max(Math.floor(((y - low) / (high - low)) * steps + 0.5), 0), steps - 1)
  return converter.coding === 'twos' ? straight - steps / 2 : straight
}
