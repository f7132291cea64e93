import { Text, type View } from '@react-pdf/renderer'
import type { ComponentProps, ReactNode } from 'react'
import { toPrintable } from './glyphs.ts'
import { styles } from './theme.ts'

export type PrintStyle = NonNullable<ComponentProps<typeof View>['style']>

interface PrintProps {
  children: string
  style?: PrintStyle
}

/** The only way in which a note sets text: every string passes the glyph guard. */
export function Print({ children, style = {} }: PrintProps): ReactNode {
  return (
    <Text style={[styles.text, ...(Array.isArray(style) ? style : [style])]}>{toPrintable(children)}</Text>
  )
}
