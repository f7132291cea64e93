import { openSimulator } from '#server/lib/simulator.ts'

/** ngspice as an independent judge of this file's tests: one instance, its runs in a queue. */
export const { runOp, runAc, runNoise, runTran } = openSimulator()
