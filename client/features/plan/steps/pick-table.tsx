import { share } from '#shared/note/figures.ts'
import { formatNumber } from '#shared/units/format-quantity.ts'
import { toRkm } from '#shared/units/rkm.ts'
import { numberAt } from '../draft/paths.ts'
import { usePlanner } from '../planner-context.tsx'
import { fieldId } from '../words/steps.ts'
import { TableRegion } from './step-parts.tsx'

/** The best few sets of values: the smallest error is not always the cheapest set. */
export function PickTable() {
  const { state, dispatch, candidate, readOnly } = usePlanner()
  const picks = candidate?.picks ?? []
  if (picks.length < 2) return null
  const asked = numberAt(state.document, 'choose.pick')
  const inUse = candidate?.pick ?? 0
  const refs = Object.keys(picks[0]?.values ?? {})
  const take = (pick: number) =>
    dispatch({
      type: 'set',
      changes: [{ path: 'choose.pick', value: pick === 0 ? undefined : pick }],
      label: 'Set of values',
    })
  return (
    <section>
      <TableRegion label="Sets of values">
        <table className="plan-table" id={fieldId('choose.pick')}>
          <caption>
            Sets of values{candidate?.optimum ? '; the smallest possible error is ' : ''}
            {candidate?.optimum && (
              <>
                {share(candidate.optimum.error)}, the tolerance of the resistors makes{' '}
                {share(candidate.optimum.toleranceError)}
              </>
            )}
          </caption>
          <thead>
            <tr>
              <th scope="col">Take</th>
              {refs.map((ref) => (
                <th key={ref} scope="col" className="n">
                  {ref}
                </th>
              ))}
              <th scope="col" className="n">
                Error of the ends
              </th>
              <th scope="col" className="n">
                Cost
              </th>
              <th scope="col" className="n">
                Different values
              </th>
            </tr>
          </thead>
          <tbody>
            {picks.map((pick, index) => (
              <tr key={index} data-in-use={index === inUse || undefined}>
                <td>
                  <label className="pick">
                    <input
                      type="radio"
                      name="pick"
                      checked={(asked ?? inUse) === index}
                      disabled={readOnly !== null}
                      onChange={() => take(index)}
                    />
                    Set {index + 1}
                  </label>
                </td>
                {refs.map((ref) => (
                  <td key={ref} className="n">
                    {toRkm(pick.values[ref] ?? 0, 'Ω')}
                  </td>
                ))}
                <td className="n">{share(pick.error)}</td>
                <td className="n">{formatNumber(pick.cost, { digits: 3 })}</td>
                <td className="n">{pick.distinct}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </TableRegion>
      <p className="field-note">
        Cost counts the distance from the preferred resistance, values outside E24 and different values. Sets
        no worse than a tenth of the tolerance error are compared by it.
      </p>
    </section>
  )
}
