import { useMemo, type KeyboardEvent } from 'react'
import { boundsOf, type SchematicPart, type SymbolSet } from '#shared/schematic/types.ts'
import { describeConnections } from '#shared/schematic/connections.ts'
import { layoutSchematic } from '#shared/schematic/layout.ts'
import type { Network } from '#shared/network/types.ts'
import { Drawing, Shapes } from './shape-view.tsx'

export interface SchematicProps {
  network: Network
  symbols?: SymbolSet
  /** Words for sources and the converter by designator. */
  labels?: Readonly<Record<string, string>>
  caption?: string
  /** Part that is lit from elsewhere: its row in a table. */
  lit?: string | null
  /** Hover or focus on a part, or null when it leaves. */
  onLight?(ref: string | null): void
  /** A part was chosen by pointer or Enter. */
  onPart?(ref: string): void
}

/** The circuit, drawn from its network. Each part is a link in signal order. */
export function Schematic({ network, symbols, labels, caption, lit, onLight, onPart }: SchematicProps) {
  const drawing = useMemo(
    () => layoutSchematic(network, { symbols: symbols ?? 'iec', ...(labels ? { labels } : {}) }),
    [network, symbols, labels],
  )
  const connections = useMemo(() => describeConnections(network), [network])
  const words = useMemo(() => new Map(connections.map((c) => [c.ref, c.text])), [connections])
  const partWords = useMemo(() => drawing.parts.flatMap((p) => p.labels), [drawing])
  return (
    <figure className="d-figure">
      {caption === undefined ? null : <figcaption className="d-caption">{caption}</figcaption>}
      <div className="d-scroll" tabIndex={0} role="group" aria-label="Schematic, scrolls sideways">
        <Drawing
          box={{ x: 0, y: 0, width: drawing.width, height: drawing.height }}
          label={`Schematic of ${network.title}: ${drawing.parts.length} parts in signal order`}
        >
          <Shapes shapes={drawing.background} />
          {drawing.parts.map((part) => (
            <Part
              key={part.ref}
              part={part}
              words={words.get(part.ref) ?? ''}
              isLit={lit === part.ref}
              {...(onLight ? { onLight } : {})}
              {...(onPart ? { onPart } : {})}
            />
          ))}
          {/* The words of each part are in its name already. */}
          <g aria-hidden="true" className="d-words">
            <Shapes shapes={partWords} />
          </g>
        </Drawing>
      </div>
      <details className="d-connections">
        <summary>Connections in words</summary>
        <ul>
          {connections.map((c) => (
            <li key={c.ref}>
              <b>{c.ref}</b> {c.value}, {c.text}
            </li>
          ))}
        </ul>
      </details>
    </figure>
  )
}

/** Smallest target of a pointer, px. */
const TARGET = 24

function Part({
  part,
  words,
  isLit,
  onLight,
  onPart,
}: {
  part: SchematicPart
  words: string
  isLit: boolean
  onLight?(ref: string | null): void
  onPart?(ref: string): void
}) {
  const bounds = boundsOf(part.body)
  const [dx, dy] = [Math.max(4, (TARGET - bounds.width) / 2), Math.max(4, (TARGET - bounds.height) / 2)]
  const choose = () => onPart?.(part.ref)
  const handleKey = (event: KeyboardEvent) => {
    if (event.key !== 'Enter' && event.key !== ' ') return
    event.preventDefault()
    choose()
  }
  return (
    <g
      className={`d-part${isLit ? ' d-lit' : ''}`}
      role={onPart ? 'button' : 'img'}
      tabIndex={0}
      aria-label={[`${part.ref} ${part.value}`.trim(), words].filter(Boolean).join(', ')}
      onClick={choose}
      onKeyDown={handleKey}
      onPointerEnter={() => onLight?.(part.ref)}
      onPointerLeave={() => onLight?.(null)}
      onFocus={() => onLight?.(part.ref)}
      onBlur={() => onLight?.(null)}
    >
      <rect
        className="d-part-ground"
        x={bounds.x - dx}
        y={bounds.y - dy}
        width={bounds.width + 2 * dx}
        height={bounds.height + 2 * dy}
      />
      <Shapes shapes={part.shapes} />
    </g>
  )
}
