import { z } from 'zod'
import { idSchema, lineOfText } from './common.ts'
import { endpoint } from './endpoint.ts'
import { roles } from './permissions.ts'

export const passwordMinimum = 10
const passwordMaximum = 128

/** Stored in lower case, so that one address is one account. */
export const emailSchema = z
  .string()
  .trim()
  .max(254, 'E-mail address: at most 254 characters.')
  .toLowerCase()
  .pipe(z.email('E-mail address: type one address, such as name@example.org.'))

/** Long enough is the only rule of composition; common ones are refused by the server. */
export const newPasswordSchema = z
  .string()
  .min(passwordMinimum, `Password: use at least ${passwordMinimum} characters.`)
  .max(passwordMaximum, `Password: at most ${passwordMaximum} characters.`)

export const signInSchema = z.strictObject({
  email: emailSchema,
  password: z
    .string()
    .min(1, 'Password: type it.')
    .max(passwordMaximum, `Password: at most ${passwordMaximum} characters.`),
})
export type SignIn = z.output<typeof signInSchema>

export const signUpSchema = z.strictObject({
  name: lineOfText('Your name', { max: 80 }),
  email: emailSchema,
  password: newPasswordSchema,
  workspaceName: lineOfText('Name of the workspace', { max: 80 }),
})
export type SignUp = z.output<typeof signUpSchema>

export const workspaceSchema = z.object({
  id: idSchema,
  name: z.string(),
  /** Begins the numbers of this workspace's notes: QH in QH-0412. */
  prefix: z.string(),
  roles: z.array(z.enum(roles)),
})
export type Workspace = z.output<typeof workspaceSchema>

export const sessionSchema = z.object({
  /** null: a visitor. */
  user: z.object({ id: idSchema, name: z.string(), email: z.string() }).nullable(),
  workspaces: z.array(workspaceSchema),
  /** True on a demonstration server; the pages then say that all names are invented. */
  demo: z.boolean(),
  /** False where accounts are made by invitation only. */
  signUpOpen: z.boolean(),
})
export type Session = z.output<typeof sessionSchema>

export const sessionApi = {
  /** Answers visitors as well, with `user: null`. */
  get: endpoint({ method: 'GET', path: '/api/session', access: 'public', response: sessionSchema }),
  signIn: endpoint({
    method: 'POST',
    path: '/api/session',
    access: 'public',
    body: signInSchema,
    response: sessionSchema,
  }),
  signOut: endpoint({ method: 'DELETE', path: '/api/session', access: 'public' }),
  /** Makes the account and its first workspace, and signs in. The new member is its owner and an engineer. */
  signUp: endpoint({
    method: 'POST',
    path: '/api/accounts',
    access: 'public',
    body: signUpSchema,
    response: sessionSchema,
    status: 201,
  }),
}
