import { randomBytes } from 'node:crypto'

const alphabet = '0123456789abcdefghjkmnpqrstvwxyz'

/** A new identifier: 16 characters, 80 random bits. Not a secret, only unlikely to be met twice. */
export function createId(): string {
  return Array.from(randomBytes(16), (byte) => alphabet[byte % alphabet.length]).join('')
}
