import { View } from '@react-pdf/renderer'
import type { ReactNode } from 'react'
import { stateWords } from '#shared/note/span.ts'
import type { Column, Row, Table } from '#shared/note/types.ts'
import { StateMark, stateColours } from './marks.tsx'
import { Print } from './text.tsx'
import { styles } from './theme.ts'

/** A ruled table whose head row is repeated on each sheet that it reaches; rows are never split. */
export function TableView({ table }: { table: Table }): ReactNode {
  const total = table.columns.reduce((sum, column) => sum + column.share, 0)
  const width = (column: Column) => ({ width: `${(100 * column.share) / total}%` })
  return (
    <View>
      <View style={styles.headRow} minPresenceAhead={44} fixed>
        {table.columns.map((column, index) => (
          <Print
            key={index}
            style={[styles.headCell, width(column), column.align ? { textAlign: 'right' } : {}]}
          >
            {column.title}
          </Print>
        ))}
      </View>
      {table.rows.map((row, index) => (
        <RowView key={index} row={row} columns={table.columns} width={width} />
      ))}
    </View>
  )
}

interface RowProps {
  row: Row
  columns: Column[]
  width: (column: Column) => { width: string }
}

function RowView({ row, columns, width }: RowProps): ReactNode {
  return (
    <View style={row.total ? [styles.row, styles.totalRow] : styles.row} wrap={false}>
      {columns.map((column, index) => {
        if (row.state && index === columns.length - 1)
          return (
            <View key={index} style={[width(column), { flexDirection: 'row', paddingLeft: 5 }]}>
              <StateMark state={row.state} />
              <Print style={[styles.cell, { marginLeft: 3, color: stateColours[row.state] }]}>
                {stateWords[row.state]}
              </Print>
            </View>
          )
        const weight = column.strong || row.total ? { fontWeight: 500 as const } : {}
        return (
          <Print
            key={index}
            style={[styles.cell, width(column), weight, column.align ? { textAlign: 'right' } : {}]}
          >
            {row.cells[index] ?? ''}
          </Print>
        )
      })}
    </View>
  )
}
