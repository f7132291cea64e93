import { useCallback, useState } from 'react'

interface LinkLinesProps {
  /** Which effects one cause explains, by the rows' keys. */
  links: readonly { cause: string; effects: readonly string[] }[]
}

interface Lane {
  x: number
  from: number
  to: number[]
}

const LANE = 8
const REACH = 10

/** Narrow lines from the row of an edit to the rows of the answers that it alone moved, in the gutter of a table. */
export function LinkLines({ links }: LinkLinesProps) {
  const [lanes, setLanes] = useState<{ height: number; list: Lane[] }>({ height: 0, list: [] })
  const hold = useCallback(
    (node: SVGSVGElement | null) => {
      const frame = node?.parentElement
      if (!frame) return undefined
      const measure = () => {
        const top = frame.getBoundingClientRect().top
        const middle = (key: string): number | null => {
          const row = frame.querySelector(`[data-link="${CSS.escape(key)}"]`)
          if (!row) return null
          const box = row.getBoundingClientRect()
          return box.top - top + box.height / 2
        }
        const list = links.flatMap(({ cause, effects }, i): Lane[] => {
          const from = middle(cause)
          const to = effects.map(middle).filter((y) => y !== null)
          return from === null || to.length === 0
            ? []
            : [{ x: gutterOf(links.length) - REACH - i * LANE, from, to }]
        })
        setLanes({ height: frame.clientHeight, list })
      }
      measure()
      const watch = new ResizeObserver(measure)
      watch.observe(frame)
      return () => watch.disconnect()
    },
    [links],
  )
  const width = gutterOf(links.length)
  return (
    <svg
      ref={hold}
      className="link-lines"
      width={width}
      height={lanes.height}
      aria-hidden="true"
      focusable="false"
    >
      {lanes.list.map(({ x, from, to }, i) => (
        <g key={i}>
          <path d={`M${width} ${from}H${x}V${Math.max(...to)}`} />
          {to.map((y) => (
            <path
              key={y}
              d={`M${x} ${y}H${width}M${width - 5} ${y - 2.5}L${width} ${y}L${width - 5} ${y + 2.5}`}
            />
          ))}
        </g>
      ))}
    </svg>
  )
}

/** Room that the lines need at the left of the table, px. */
export const gutterOf = (lanes: number): number => (lanes === 0 ? 0 : REACH + lanes * LANE + 4)
