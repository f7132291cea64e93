import type { Budget, ErrorState } from '#shared/design/plan.ts'
import { stateWords, type Scale } from '#shared/note/quality-tables.ts'
import type { Table } from '#shared/note/types.ts'
import { totalShare, totalText } from './budget-words.ts'

const states = Object.keys(stateWords) as ErrorState[]

/** The totals of the three states with the digits that they have everywhere else on the page. */
export function sameDigits(table: Table, budget: Budget, { perQuantity, unit, lsb, span }: Scale): Table {
  return {
    ...table,
    rows: table.rows.map((row) => {
      const state = states.find((one) => stateWords[one] === row.cells[0])
      if (!state) return row
      const { worst, rss, expanded } = budget.totals[state]
      const [name = '', , , , k = '', , , ...rest] = row.cells
      const measurand = (volts: number) => `±${totalText(volts / perQuantity, unit)}`
      return {
        ...row,
        cells: [
          name,
          measurand(worst),
          measurand(rss),
          measurand(expanded),
          k,
          totalText(expanded / lsb, ''),
          totalShare(expanded / span),
          ...rest,
        ],
      }
    }),
  }
}
