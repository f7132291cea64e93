import type { Plan } from './plan.ts'

/** Rounds every number of a plan to 12 significant digits, so that two right computers print the same figures. */
export function roundPlan(plan: Plan): Plan {
  return roundValue(plan, '') as Plan
}

function roundValue(value: unknown, path: string): unknown {
  if (typeof value === 'number') return roundNumber(value, path)
  if (Array.isArray(value)) return value.map((v, at) => roundValue(v, `${path}.${at}`))
  if (typeof value === 'object' && value !== null)
    return Object.fromEntries(Object.entries(value).map(([key, v]) => [key, roundValue(v, `${path}.${key}`)]))
  return value
}

function roundNumber(value: number, path: string): number {
  if (!Number.isFinite(value))
    throw new RangeError(`a plan holds finite numbers only; ${path.slice(1)} is ${value}`)
  const rounded = Number(value.toPrecision(12))
  return rounded === 0 ? 0 : rounded
}
