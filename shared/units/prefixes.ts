/** Decimal prefixes of the SI that this trade uses, by exponent. Micro is written U+03BC. */
export const prefixes = [
  { symbol: 'f', exponent: -15 },
  { symbol: 'p', exponent: -12 },
  { symbol: 'n', exponent: -9 },
  { symbol: 'μ', exponent: -6 },
  { symbol: 'm', exponent: -3 },
  { symbol: '', exponent: 0 },
  { symbol: 'k', exponent: 3 },
  { symbol: 'M', exponent: 6 },
  { symbol: 'G', exponent: 9 },
  { symbol: 'T', exponent: 12 },
] as const

/** Exponent of a typed prefix letter; `u` stands for micro, `K` for kilo. `m` and `M` are never mixed up. */
export function prefixExponent(letter: string): number | null {
  const symbol = letter === 'u' || letter === 'µ' ? 'μ' : letter === 'K' ? 'k' : letter
  if (symbol === '') return null
  return prefixes.find((p) => p.symbol === symbol)?.exponent ?? null
}

/** Symbol of an exponent that is a multiple of three from −15 to 12. */
export function prefixSymbol(exponent: number): string {
  return prefixes.find((p) => p.exponent === exponent)?.symbol ?? ''
}
