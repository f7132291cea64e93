import { workerData } from 'node:worker_threads'
import { register } from 'tsx/esm/api'

/* In development and tests a worker runs from its TypeScript source: Node's flags do not reach worker threads. */
register()
await import(workerData.source)
