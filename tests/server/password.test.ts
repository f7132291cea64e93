import { describe, expect, it } from 'vitest'
import { hashPassword, isWeakHash, passwordProblem, verifyPassword } from '#server/lib/password.ts'
import { newPasswordSchema } from '#shared/api/session.ts'

const personal = ['ines.marten', 'Ines Marten', 'Reedbank Surveys']

describe('a new password', () => {
  it.each([
    'password12',
    'Password123!',
    'PASSWORD1!',
    'p@ssw0rd2026',
    'qwertyuiop',
    'qwertz123456',
    '1234567890',
    '0987654321!',
    'abcdefghij',
    'iloveyou1!',
    'letmein2026!',
    'Welcome2026!',
    'administrator1!',
    'football1234',
    'dragon123456',
    'sunshine2026',
    'aaaaaaaaaaaa',
    'asdfghjkl123',
    'spandrel2026!',
    'ReedbankSurveys1!',
    'ines.marten1!',
    'Summer2026!!',
  ])('%s is refused as easy to guess', (password) => {
    expect(passwordProblem(password, personal)).toContain('easy to guess')
  })

  it.each([
    'kelp forest lantern',
    'correct horse battery staple',
    'x7$Gq!m2Lp0w',
    '84193705264',
    'Läufer über Brücken',
    'モーターとランタンと川の水位',
  ])('%s is accepted', (password) => {
    expect(passwordProblem(password, personal)).toBeNull()
  })

  it('may be long and hold spaces and letters of any script, and needs no mixture', () => {
    expect(newPasswordSchema.safeParse('ö '.repeat(32)).success).toBe(true)
    expect(newPasswordSchema.safeParse('x'.repeat(129)).success).toBe(false)
    expect(newPasswordSchema.safeParse('ninechars').success).toBe(false)
  })
})

describe('a stored password', () => {
  it('fits itself and nothing that only begins like it', async () => {
    const long = `${'a long sentence of many words '.repeat(4)}end`
    const stored = await hashPassword(long)
    expect(await verifyPassword(stored, long)).toBe(true)
    expect(await verifyPassword(stored, long.slice(0, 72))).toBe(false)
    expect(await verifyPassword(null, long)).toBe(false)
  })

  it('is weak where less work was done than today', () => {
    expect(isWeakHash('$argon2id$v=19$m=19456,t=2,p=1$c2FsdA$aGFzaA')).toBe(false)
    expect(isWeakHash('$argon2id$v=19$m=4096,t=2,p=1$c2FsdA$aGFzaA')).toBe(true)
    expect(isWeakHash('$argon2i$v=19$m=19456,t=2,p=1$c2FsdA$aGFzaA')).toBe(true)
    expect(isWeakHash('$2b$10$abcdefghijklmnopqrstuv')).toBe(true)
  })
})
