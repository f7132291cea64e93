/**
 * A character that the font lacks is printed as another one, without any error. So every text passes here before it
 * is set: known signs are replaced by words or signs that exist, anything else by U+FFFD, which the font has.
 */

/** Ranges of code points that all faces of the note hold (first, last); a test compares them with the font files. */
const held: readonly (readonly [number, number])[] = [
  [0x20, 0x7e],
  [0xa0, 0xac],
  [0xae, 0x17f],
  [0x18f, 0x18f],
  [0x192, 0x192],
  [0x1a0, 0x1a1],
  [0x1af, 0x1b0],
  [0x1fa, 0x1ff],
  [0x218, 0x21b],
  [0x384, 0x38a],
  [0x38c, 0x38c],
  [0x38e, 0x3a1],
  [0x3a3, 0x3ce],
  [0x400, 0x482],
  [0x48a, 0x513],
  [0x1e80, 0x1e85],
  [0x1ea0, 0x1ef9],
  [0x2010, 0x2011],
  [0x2013, 0x2015],
  [0x2018, 0x201e],
  [0x2020, 0x2022],
  [0x2026, 0x2026],
  [0x2030, 0x2030],
  [0x2032, 0x2033],
  [0x2039, 0x203a],
  [0x2044, 0x2044],
  [0x2070, 0x2070],
  [0x2074, 0x208e],
  [0x20ac, 0x20ac],
  [0x2116, 0x2116],
  [0x2122, 0x2122],
  [0x2202, 0x2202],
  [0x2206, 0x2206],
  [0x220f, 0x220f],
  [0x2211, 0x2212],
  [0x221a, 0x221a],
  [0x221e, 0x221e],
  [0x222b, 0x222b],
  [0x2248, 0x2248],
  [0x2260, 0x2260],
  [0x2264, 0x2265],
  [0x25a0, 0x25a0],
  [0x25ca, 0x25ca],
  [0xfffd, 0xfffd],
]

/** Signs of the trade that the font lacks, with what is printed instead. */
const substitutes: Record<string, string> = {
  '\t': ' ',
  '\n': ' ',
  '\r': ' ',
  '\u00ad': '',
  '\u200b': '',
  '\u200c': '',
  '\u200d': '',
  '\ufeff': '',
  '\u2126': 'Ω',
  '\u212a': 'K',
  '\u2012': '–',
  '\u2190': 'from',
  '\u2192': 'to',
  '\u21d2': 'so',
  '\u2225': '||',
  '\u2220': 'angle ',
  '\u221d': ' proportional to ',
  '\u2207': 'grad ',
  '\u2300': 'diameter ',
  '\u2713': 'yes',
  '\u2715': 'no',
  '\u25b2': 'up',
  '\u25bc': 'down',
}

/** Spaces of other widths all become the no-break space, which no line ends at. */
const spaces = /[\u2000-\u200a\u202f\u205f\u3000]/g

export const REPLACEMENT = '\ufffd'

export function isHeld(codePoint: number): boolean {
  return held.some(([first, last]) => codePoint >= first && codePoint <= last)
}

/** The text as it can be printed: composed, substituted, and with U+FFFD for what the font does not hold. */
export function toPrintable(text: string): string {
  let printable = ''
  for (const character of text.normalize('NFC').replace(spaces, '\u00a0')) {
    const substitute = substitutes[character]
    if (substitute !== undefined) printable += substitute
    else if (isHeld(character.codePointAt(0) ?? 0)) printable += character
    else printable += REPLACEMENT
  }
  return printable
}

/** Characters of any text inside a value that can only be printed as U+FFFD, each once, in order of appearance. */
export function findUnprintable(value: unknown): string[] {
  const found = new Set<string>()
  visit(value, (text) => {
    const normal = text.normalize('NFC').replace(spaces, '\u00a0')
    for (const character of normal)
      if (substitutes[character] === undefined && !isHeld(character.codePointAt(0) ?? 0)) found.add(character)
  })
  return [...found]
}

function visit(value: unknown, see: (text: string) => void): void {
  if (typeof value === 'string') see(value)
  else if (Array.isArray(value)) for (const item of value) visit(item, see)
  else if (typeof value === 'object' && value !== null)
    for (const item of Object.values(value)) visit(item, see)
}
