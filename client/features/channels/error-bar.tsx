import type { ErrorWords } from './words.ts'

const WIDTH = 92
const TARGET = 73.6

/** Error as a bar, target as a tick, what is left hatched; the figure beside it says the same. */
export function ErrorBar({ error, target }: Pick<ErrorWords, 'error' | 'target'>) {
  if (target === null) return null
  const length = error === null ? 0 : Math.min(WIDTH, (error / target) * TARGET)
  const over = error !== null && error > target
  return (
    <svg
      width={WIDTH}
      height="12"
      viewBox={`0 0 ${WIDTH} 12`}
      aria-hidden="true"
      className="mr-2.5 inline-block flex-none align-[-2px]"
    >
      {error === null ? (
        <path d={`M0 6h${WIDTH}`} stroke="var(--edge)" strokeDasharray="3 3" />
      ) : (
        <>
          {!over && <Hatch from={length} to={TARGET} />}
          <path d={`M0 2h${length}v8H0z`} fill={over ? 'var(--minium)' : 'var(--ink-2)'} />
        </>
      )}
      <path d={`M${TARGET} 0v12`} stroke="var(--ink)" strokeWidth="2" />
    </svg>
  )
}

/** Oblique strokes of 45° between two places, cut at their ends. */
function Hatch({ from, to }: { from: number; to: number }) {
  const strokes: string[] = []
  for (let x = from - 8; x < to; x += 4.5) {
    const start = Math.max(x, from)
    const end = Math.min(x + 8, to)
    if (end > start) strokes.push(`M${start} ${10 - (start - x)}L${end} ${10 - (end - x)}`)
  }
  return <path d={strokes.join('')} stroke="var(--verdigris)" strokeWidth="1" opacity="0.7" />
}
