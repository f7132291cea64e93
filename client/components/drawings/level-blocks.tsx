import type { Level } from '#shared/design/plan.ts'
import { layoutLevelBlock } from '#shared/drawings/level-block.ts'
import type { FigureOptions, LevelTable } from '#shared/drawings/level-figures.ts'
import { CellText, cellClass } from './level-table.tsx'
import { Drawing, Shapes } from './shape-view.tsx'

/** One block per node for narrow pages: name, horizontal bay, the same five lines. */
export function LevelBlocks({
  levels,
  table,
  options,
}: {
  levels: readonly Level[]
  table: LevelTable
  options: FigureOptions
}) {
  return (
    <ol className="d-blocks">
      {levels.map((level, i) => {
        const block = layoutLevelBlock(level, options)
        return (
          <li key={level.node} className="d-block">
            <h3>{level.title}</h3>
            <Drawing box={{ x: 0, y: 0, width: block.width, height: block.height }}>
              <Shapes shapes={block.shapes} />
            </Drawing>
            <dl>
              {table.rows.map((row) => {
                const cell = row.cells[i]
                return cell ? (
                  <div key={row.name} className="contents">
                    <dt>{row.name}</dt>
                    <dd className={cellClass(cell)}>
                      <CellText cell={cell} />
                    </dd>
                  </div>
                ) : null
              })}
            </dl>
          </li>
        )
      })}
    </ol>
  )
}
