import { expect } from 'vitest'

export interface Closeness {
  /** Allowed difference as a fraction of the expected value. */
  relative?: number
  /** Allowed difference in the unit of the values. */
  absolute?: number
}

/** Fails unless `actual` lies within the larger of the two allowances of `expected`; NaN is never close. */
export function expectClose(
  actual: number,
  expected: number,
  { relative = 0, absolute = 0 }: Closeness,
): void {
  const allowed = Math.max(absolute, relative * Math.abs(expected))
  const difference = Math.abs(actual - expected)
  const message = `${actual} is not within ${allowed} of ${expected}: it differs by ${difference}`
  expect(difference <= allowed, message).toBe(true)
}
