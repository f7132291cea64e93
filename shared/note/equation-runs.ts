/** A piece of an equation: quantity symbols oblique, their subscripts upright and lowered. */
export interface Run {
  text: string
  style: 'upright' | 'symbol' | 'subscript'
}

/** Prefixed units and words that stay upright inside an equation with numbers. */
const upright = new Set([
  'V',
  'mV',
  'A',
  'mA',
  'Ω',
  'kΩ',
  'MΩ',
  'GΩ',
  'Hz',
  'kHz',
  'MHz',
  'F',
  'nF',
  'pF',
  's',
  'ms',
  'to',
  'and',
  'of',
  'per',
])

/** A name: a letter (Latin or Greek), then letters, digits or an underscore. */
const name = /\p{L}[\p{L}\d_]*/gu

/**
 * Splits an equation into runs: in "G = R2/(R1+R2)" the letters G and R are oblique, 1 and 2 are subscripts.
 * A unit after a number ("2.5 V") and function names stay upright.
 */
export function toRuns(text: string): Run[] {
  const runs: Run[] = []
  const push = (piece: string, style: Run['style']) => {
    const last = runs.at(-1)
    if (piece === '') return
    if (last?.style === style) last.text += piece
    else runs.push({ text: piece, style })
  }
  let from = 0
  for (const match of text.matchAll(name)) {
    const word = match[0]
    const before = text.slice(from, match.index)
    push(before, 'upright')
    from = match.index + word.length
    const follows = /[\d.)]\s?$/.test(text.slice(0, match.index))
    if (
      /\d$/.test(before) ||
      (follows && upright.has(word)) ||
      /^(sqrt|ln|log|max|min|to|and|of|per)$/.test(word)
    ) {
      push(word, 'upright')
      continue
    }
    const [symbol = '', ...rest] = [...word]
    push(symbol, 'symbol')
    push(rest.join('').replace(/^_/, ''), 'subscript')
  }
  push(text.slice(from), 'upright')
  return runs
}
