/**
 * Characters that have no place in a name: control characters, direction marks that make text read as another, and
 * halves of a surrogate pair.
 */
const unwanted = /[\p{Cc}\p{Cs}\u061c\u200e\u200f\u2028\u2029\u202a-\u202e\u2066-\u2069\ufeff]/u

/** True for text without control characters, direction overrides and lone surrogates. */
export function isCleanText(text: string): boolean {
  return !unwanted.test(text)
}
