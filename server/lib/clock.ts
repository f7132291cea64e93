/** Milliseconds since 1970, UTC. Tests put their own in. */
export type Clock = () => number

export const systemClock: Clock = () => Date.now()

export const toIso = (milliseconds: number): string => new Date(milliseconds).toISOString()
