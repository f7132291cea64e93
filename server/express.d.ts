import 'express-session'

declare module 'express-session' {
  interface SessionData {
    passport?: { user?: string }
  }
}

declare global {
  namespace Express {
    /** Who is signed in; never more of the account than this. */
    interface User {
      id: string
      name: string
      email: string
    }
    interface Request {
      /** Stands in the log and in the answer to an error. */
      requestId: string
    }
  }
}
