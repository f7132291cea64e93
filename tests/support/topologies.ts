import type { Network } from '#shared/network/types.ts'
import { buildTextbookPart } from './amplifier-part.ts'
import { Bench } from './circuits.ts'

export function offsetUp(
  r1: number,
  r2: number,
  rg: number,
  rf: number,
  reference: number,
  signal = 0,
): Network {
  return new Bench()
    .v('VSENSE', 'sense', signal)
    .v('VREF', 'vref', reference)
    .r('R1', 'sense', 'p', r1)
    .r('R2', 'vref', 'p', r2)
    .r('RG', 'm', '0', rg)
    .r('RF', 'adc', 'm', rf)
    .u('U1', 'p', 'm', 'adc')
    .build()
}

/** 1 + r2/r1; ITEST pushes a test current into the output. */
export function nonInverting(
  r1: number,
  r2: number,
  part = buildTextbookPart(),
  testAmplitude?: number,
): Network {
  return new Bench(part)
    .v('VSENSE', 'sense', 0, '0', testAmplitude === undefined ? 1 : 0)
    .i('ITEST', '0', 'adc', 0, testAmplitude)
    .r('R1', 'm', '0', r1)
    .r('R2', 'adc', 'm', r2)
    .u('U1', 'sense', 'm', 'adc')
    .build()
}

export function follower(part = buildTextbookPart()): Network {
  return new Bench(part).v('VSENSE', 'sense', 0, '0', 1).u('U1', 'sense', 'adc', 'adc').build()
}

export function summing(
  sources: string[],
  resistors: number[],
  feedback: number,
  values: number[],
  part = buildTextbookPart(),
  load?: number,
): Network {
  const bench = new Bench(part)
    .u('U1', '0', 'm', 'adc')
    .r('RF', 'adc', 'm', feedback)
    .i('ITEST', '0', 'adc', 0)
  sources.forEach((ref, k) => {
    bench.v(ref, `in${k}`, values[k] ?? 0, '0', 1).r(`RI${k}`, `in${k}`, 'm', resistors[k] ?? 0)
  })
  if (load !== undefined) bench.r('RL', 'adc', '0', load)
  return bench.build()
}

export function difference([r1, r2, r3, r4]: number[]): Network {
  return new Bench()
    .v('V1', 'a', 0)
    .v('V2', 'b', 0)
    .r('R1', 'a', 'm', r1 ?? 0)
    .r('R2', 'adc', 'm', r2 ?? 0)
    .r('R3', 'b', 'p', r3 ?? 0)
    .r('R4', 'p', '0', r4 ?? 0)
    .u('U1', 'p', 'm', 'adc')
    .build()
}

export function twoAmplifiers(small: number, large: number, rg: number | null): Network {
  const bench = new Bench()
    .v('VP', 'sp', 0)
    .v('VM', 'sm', 0)
    .u('U1', 'sm', 'm1', 'o1')
    .u('U2', 'sp', 'm2', 'adc')
    .r('R1', 'm1', '0', large)
    .r('R2', 'o1', 'm1', small)
    .r('R3', 'm2', 'o1', small)
    .r('R4', 'adc', 'm2', large)
  if (rg !== null) bench.r('RG', 'm1', 'm2', rg)
  return bench.build()
}

export function threeAmplifiers(r: number, rg: number, ri: number, rf: number): Network {
  return new Bench()
    .v('VP', 'sp', 0)
    .v('VM', 'sm', 0)
    .u('U1', 'sp', 'm1', 'o1')
    .u('U2', 'sm', 'm2', 'o2')
    .r('R1', 'o1', 'm1', r)
    .r('R2', 'o2', 'm2', r)
    .r('RG', 'm1', 'm2', rg)
    .r('R3', 'o2', 'm3', ri)
    .r('R4', 'adc', 'm3', rf)
    .r('R5', 'o1', 'p3', ri)
    .r('R6', 'p3', '0', rf)
    .u('U3', 'p3', 'm3', 'adc')
    .build()
}
