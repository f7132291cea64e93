import { channelsApi } from './channels.ts'
import type { Endpoint } from './endpoint.ts'
import { noteApi } from './note.ts'
import { planApi } from './plan.ts'
import { projectsApi } from './projects.ts'
import { sessionApi } from './session.ts'

/** The only list of resources; the server must serve exactly these, and a test compares. */
export const apis = { sessionApi, projectsApi, channelsApi, planApi, noteApi }

export const endpoints: Endpoint[] = Object.values(apis).flatMap((api) => Object.values(api))
