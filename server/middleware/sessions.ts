import type { RequestHandler } from 'express'
import session from 'express-session'
import passport from 'passport'
import { Strategy } from 'passport-local'
import { IsNull } from 'typeorm'
import type { Config } from '#server/config.ts'
import { User } from '#server/entities/user.ts'
import type { Db } from '#server/lib/db.ts'
import { isWeakHash, hashPassword, verifyPassword } from '#server/lib/password.ts'
import { absoluteLimit, type SessionStore } from '#server/lib/session-store.ts'

/** Bound to this host and to https where there is https; a plain name on a developer's own machine. */
export const cookieName = (isSecure: boolean): string => (isSecure ? '__Host-spandrel' : 'spandrel')

const toCurrentUser = (user: User): Express.User => ({ id: user.id, name: user.name, email: user.email })

async function findUser(db: Db, where: { id: string } | { email: string }): Promise<User | null> {
  return db.read.findOne(User, { where: { ...where, disabledAt: IsNull() } })
}

/** A right password whose stored hash is too weak is stored again with today's work. */
async function strengthen(db: Db, user: User, password: string): Promise<void> {
  if (!isWeakHash(user.passwordHash)) return
  const passwordHash = await hashPassword(password)
  await db.write((manager) => manager.update(User, { id: user.id }, { passwordHash }))
}

export interface Sessions {
  /** To be mounted on the API only: pages and files need no session. */
  handlers: RequestHandler[]
  passport: passport.Authenticator
}

/** Who is signed in: a cookie, the session behind it, and the account as it stands now. */
export function createSessions(config: Config, db: Db, store: SessionStore): Sessions {
  const authenticator = new passport.Passport()
  authenticator.use(
    new Strategy({ usernameField: 'email' }, (email, password, done) => {
      const check = async (): Promise<Express.User | false> => {
        const user = await findUser(db, { email })
        if (!(await verifyPassword(user?.passwordHash ?? null, password)) || !user) return false
        await strengthen(db, user, password)
        return toCurrentUser(user)
      }
      check().then((user) => done(null, user), done)
    }),
  )
  authenticator.serializeUser((user, done) => done(null, user.id))
  authenticator.deserializeUser((id: string, done) => {
    findUser(db, { id }).then((user) => done(null, user ? toCurrentUser(user) : false), done)
  })
  return {
    passport: authenticator,
    handlers: [
      session({
        name: cookieName(config.isSecure),
        secret: config.sessionSecret,
        store,
        resave: false,
        saveUninitialized: false,
        rolling: false,
        cookie: {
          httpOnly: true,
          sameSite: 'lax',
          secure: config.isSecure,
          path: '/',
          maxAge: absoluteLimit,
        },
      }),
      authenticator.session() as RequestHandler,
    ],
  }
}
