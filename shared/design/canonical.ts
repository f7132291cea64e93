import { sha256 } from '@noble/hashes/sha2.js'
import { bytesToHex, utf8ToBytes } from '@noble/hashes/utils.js'
import canonicalize from 'canonicalize'

/** RFC 8785 canonical JSON of plain data. Throws RangeError where a value has no JSON form. */
export function toCanonicalJson(value: unknown): string {
  const text = canonicalize(value)
  if (text === undefined) throw new RangeError('this value has no JSON form')
  return text
}

/** SHA-256 of the canonical JSON, in lower-case hexadecimal (FIPS 180-4). */
export function hashOf(value: unknown): string {
  return bytesToHex(sha256(utf8ToBytes(toCanonicalJson(value))))
}
