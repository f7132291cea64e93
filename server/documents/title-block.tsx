import { View } from '@react-pdf/renderer'
import type { ReactNode } from 'react'
import type { TitleField } from '#shared/note/types.ts'
import { Print } from './text.tsx'
import { colours, styles } from './theme.ts'

interface TitleBlockProps {
  rows: TitleField[][]
  /** What stands in place of the verification mark. */
  statement: string
  /** "1 of 6" */
  sheet: string
}

/** Widths of the four columns to each other. */
const SHARES = [1.55, 1, 1.08, 0.85]

/** Five columns and three rows after ISO 7200. */
export function TitleBlock({ rows, statement, sheet }: TitleBlockProps): ReactNode {
  return (
    <View style={styles.titleBlock}>
      <View style={styles.titleStatement}>
        <Print style={{ fontSize: 7.2, lineHeight: 1.3 }}>{statement}</Print>
      </View>
      <View style={{ flex: 1 }}>
        {rows.map((fields, row) => (
          <View
            key={row}
            style={{
              flexDirection: 'row',
              borderTopWidth: row === 0 ? 0 : 0.5,
              borderTopColor: colours.hair,
            }}
          >
            {fields.map((field, column) => (
              <View
                key={field.label}
                style={[
                  styles.titleField,
                  {
                    flexBasis: 0,
                    flexGrow: SHARES[column] ?? 1,
                    borderLeftWidth: column === 0 ? 0 : 0.75,
                    borderLeftColor: colours.ink,
                  },
                ]}
              >
                <Print style={styles.titleLabel}>{field.label}</Print>
                <Print style={styles.titleValue}>{field.label === 'Sheet' ? sheet : field.value}</Print>
              </View>
            ))}
          </View>
        ))}
      </View>
    </View>
  )
}
