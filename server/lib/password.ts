import { hash, verify } from '@node-rs/argon2'
import { isCommonPassword } from './common-passwords.ts'

const memory = 19_456
const passes = 2

/** argon2id is the package's default algorithm. */
const options = { memoryCost: memory, timeCost: passes, parallelism: 1 }

export const hashPassword = (password: string): Promise<string> => hash(password, options)

/** A hash that no password fits, so that an unknown account costs the same time as a wrong password. */
const nobody = hashPassword(`no account ${Math.random()}`)

/** Compares; a missing hash is compared too, and never fits. */
export async function verifyPassword(stored: string | null, password: string): Promise<boolean> {
  const isRight = await verify(stored ?? (await nobody), password)
  return stored !== null && isRight
}

/** True for a hash made with less work than today's. */
export function isWeakHash(stored: string): boolean {
  const found = /^\$argon2id\$v=19\$m=(\d+),t=(\d+),p=1\$/.exec(stored)
  return !found || Number(found[1]) < memory || Number(found[2]) < passes
}

/** Why a new password is refused, or null. `personal` are words of the account that it must not be made of. */
export function passwordProblem(password: string, personal: string[]): string | null {
  if (isCommonPassword(password, personal))
    return 'Password: this one is easy to guess. Use several unrelated words, or let a password manager make one.'
  return null
}
