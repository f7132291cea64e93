import type { ChainSpec } from '#shared/design/chain.ts'
import type { Budget, BudgetLine, BudgetTotal, ErrorState, NoiseSummary } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { adjustmentTerms } from './adjustment-terms.ts'
import { surveyErrors } from './error-field.ts'
import { expandedOf, limitTotals, worstPoint } from './error-totals.ts'
import { inputTerms, states, type Residuals, type Term } from './error-terms.ts'
import { proposeImprovements } from './improvements.ts'

/**
 * Error budget of a chain: every uncertain input one variable, its first-order sensitivity of y summed before anything is
 * squared. Three states: as built; after zero adjustment; after zero and span. Adjustment is made at the calibration
 * temperature and takes away what stands there and then; the rest is looked at over span, common mode and temperature,
 * at the end of the calibration interval. Sources: JCGM 100 (GUM) 5 and 6, JCGM 101 for the combined distribution.
 */
export function computeBudget(design: Design, spec: ChainSpec, noise: NoiseSummary): Budget {
  const field = surveyErrors(design, spec, noise)
  const terms = [...inputTerms(field), ...adjustmentTerms(design, field, noise)]
  const counted = terms.filter((term) => counts(term, Math.abs(field.span)))
  const coverage = design.target?.coverage ?? 0.95
  const { quantity } = design.sensor
  const perQuantity = Math.abs(field.span / (quantity.high - quantity.low))
  const found = states.map((state) => totalOf(counted, state, coverage))
  const [asBuilt, zeroed, calibrated] = found
  if (!asBuilt || !zeroed || !calibrated) throw new RangeError('a budget has three states')
  const at = { asBuilt, zeroed, calibrated }
  const state = design.target?.state ?? 'calibrated'
  const limit = design.target
    ? design.target.limit * (design.target.per === 'span' ? Math.abs(field.span) : perQuantity)
    : null
  const target = limit === null ? null : { state, limit, met: at[state].total.expanded <= limit }
  const lines = counted
    .map((term) => toLine(term, at, state))
    .sort((a, b) => b.share - a.share || b.asBuilt - a.asBuilt || (a.id < b.id ? -1 : 1))
  return {
    lines,
    totals: { asBuilt: asBuilt.total, zeroed: zeroed.total, calibrated: calibrated.total },
    coverage,
    points: field.adjusted.map((p) => p.quantity),
    perQuantity,
    target,
    improvements: proposeImprovements(lines, counted, state, coverage, at[state].total.expanded, target),
    zeroingHurts: zeroed.total.expanded > asBuilt.total.expanded * (1 + NOTICED),
  }
}

/** A total that zeroing makes larger by less than this share is as good as the same. */
const NOTICED = 0.01

/** Self-heating below this share of the span is left out (engine: error budget). */
const SMALLEST_HEATING = 1e-6

/** What acts on y at all: a rail that only its amplifiers' rejection lets through has no line of its own. */
function counts(term: Term, span: number): boolean {
  const most = Math.max(...states.map((state) => largest(term.residuals[state]))) * term.limit
  return most > (term.id.endsWith('.selfHeating') ? SMALLEST_HEATING * span : 0)
}

const largest = (list: Residuals): number => {
  let most = 0
  for (const value of list) most = Math.max(most, Math.abs(value))
  return most
}

interface StateTotal {
  total: BudgetTotal
  /** Index of the worst point in the residuals. */
  at: number
}

function totalOf(terms: readonly Term[], state: ErrorState, coverage: number): StateTotal {
  const worst = worstPoint(terms, state, coverage)
  const { expanded, standard, by } = expandedOf(terms, state, worst, coverage)
  const place = terms[0]?.places[worst]
  return {
    at: worst,
    total: {
      ...limitTotals(terms, state),
      expanded,
      standard,
      k: standard > 0 ? expanded / standard : 0,
      coverageBy: by,
      at: place?.quantity ?? 0,
      temperature: place?.temperature ?? 0,
    },
  }
}

function toLine(term: Term, at: Record<ErrorState, StateTotal>, state: ErrorState): BudgetLine {
  const left = (which: ErrorState): number => Math.abs(term.residuals[which][at[which].at] ?? 0)
  const standard = left(state) * term.deviation
  const variance = at[state].total.standard ** 2
  return {
    id: term.id,
    label: term.label,
    source: term.source,
    path: term.path,
    limit: term.limit * term.mostFactor,
    unit: term.unit,
    distribution: term.distribution,
    sensitivity: term.slopes[at.asBuilt.at] ?? 0,
    standard,
    calibrates: term.calibrates,
    group: term.group,
    asBuilt: left('asBuilt') * term.limit,
    zeroed: left('zeroed') * term.limit,
    calibrated: left('calibrated') * term.limit,
    share: variance > 0 ? standard ** 2 / variance : 0,
  }
}
