import type { Channel } from '#shared/api/channels.ts'
import { formatQuantity, formatRange, type DecimalSign } from '#shared/units/format-quantity.ts'
import { channelNumber, roomRule } from './words.ts'
import { whenOf } from '#client/lib/when.ts'

export interface BoardFacts {
  converters: string
  supply: string
  rule: string
  lastChange: string
}

/** What the title block of a board says, taken from its channels: one figure where they agree, how many where not. */
export function boardFacts(channels: readonly Channel[], decimalSign: DecimalSign = '.'): BoardFacts {
  const last = channels.reduce<Channel | null>(
    (a, b) => (a === null || b.updatedAt > a.updatedAt ? b : a),
    null,
  )
  return {
    converters: agreed(
      channels.flatMap(({ document: { converter } }) =>
        converter
          ? [
              `${converter.bits} bit, ${formatRange(converter.input.low, converter.input.high, 'V', { unitOnce: true, decimalSign })}`,
            ]
          : [],
      ),
      'kinds',
    ),
    supply: agreed(
      channels.flatMap(({ document: { rails } }) =>
        rails
          ? [
              rails.negative
                ? formatRange(rails.negative, rails.positive, 'V', { unitOnce: true, decimalSign })
                : formatQuantity(rails.positive, 'V', { decimalSign }),
            ]
          : [],
      ),
      'supplies',
    ),
    rule: agreed(
      channels.map(({ document }) =>
        formatQuantity(roomRule(document), '', { display: 'percent', decimalSign }),
      ),
      'rules',
    ),
    lastChange: last ? `CH ${channelNumber(last)}, ${whenOf(last.updatedAt)}` : 'none yet',
  }
}

function agreed(values: readonly string[], plural: string): string {
  const different = [...new Set(values)]
  return different.length === 0
    ? 'open'
    : different.length === 1
      ? (different[0] ?? '')
      : `${different.length} ${plural}`
}
