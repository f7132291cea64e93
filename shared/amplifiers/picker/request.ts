import type { Pair, ValueForm } from './forms.ts'

/** A demand on two resistors together; applied to the pairs before anything is searched. Ω, the chosen values alone. */
export interface PairLimit {
  refs: [string, string]
  minimumSum?: number
  minimumParallel?: number
  maximumParallel?: number
}

export interface PickRequest {
  form: ValueForm
  /** Output wanted at the low and the high end of the measurand, V. */
  target: Pair
  /**
   * Allowed values per ref, ascending, Ω. A value that a person fixed is a list of one. 0 (a link) and Infinity (left
   * open) may be members where the arrangement can do without that resistor.
   */
  lists: Record<string, readonly number[]>
  pairs?: readonly PairLimit[]
  /** Limit ± per ref, as a fraction. */
  tolerance: Record<string, number>
  /** Preferred impedance, Ω. */
  preferred: number
  /** Range that both ends of a pick must stay inside with their resistors at the limits, V. */
  inside?: Pair
  /** How many picks of each kind to return, default 8. */
  count?: number
}

export interface Pick {
  /** Ω by ref. A link is 0; a ref left open is absent. */
  values: Record<string, number>
  /** Larger end-point error over the target span, ideal amplifiers, source and reference resistance included. */
  error: number
  /** By the table `COST`, rounded to 1e-6 so that ties are ties. */
  cost: number
  /** Number of distinct resistor values. */
  distinct: number
  /** Error within the threshold. */
  practical: boolean
  /** Output at the two ends, V. */
  ends: Pair
}

export type PickResult =
  | {
      ok: true
      /** Smallest error possible with the allowed values, E_min. */
      optimum: number
      /** Error that the resistors' tolerances cost at that pick, over the span, T. */
      toleranceError: number
      /** max(E_min, T/10): what a practical pick may miss by. */
      threshold: number
      /** Practical picks with distinct end points, cheapest first; empty only where `inside` leaves none. */
      picks: Pick[]
      /** Smallest errors with distinct end points. */
      best: Pick[]
    }
  | { ok: false; reason: 'outside-window' | 'no-allowed-pair'; closest?: Pick }
