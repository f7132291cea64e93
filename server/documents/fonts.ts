import { createRequire } from 'node:module'
import { Font } from '@react-pdf/renderer'

/**
 * The note is set in static instances of Roboto. The interface's variable family cannot be used here: the PDF
 * library reads neither its width axis nor its WOFF2 files, and Roboto Flex comes as static file in one weight only.
 * Roboto has the same skeleton, digits of one width, and Greek and mathematical signs in every weight, so that one
 * file a weight is embedded as a subset.
 */
export const TEXT = 'Roboto'

const require = createRequire(import.meta.url)

const faces = [
  { file: '400Regular/Roboto_400Regular.ttf', fontWeight: 400, fontStyle: 'normal' },
  { file: '400Regular_Italic/Roboto_400Regular_Italic.ttf', fontWeight: 400, fontStyle: 'italic' },
  { file: '500Medium/Roboto_500Medium.ttf', fontWeight: 500, fontStyle: 'normal' },
  { file: '600SemiBold/Roboto_600SemiBold.ttf', fontWeight: 600, fontStyle: 'normal' },
] as const

export const fontFiles = faces.map(({ file }) => require.resolve(`@expo-google-fonts/roboto/${file}`))

/** Words longer than this may be broken: no column is wide enough for them. */
const LONGEST_WORD = 28
const PIECE = 14

let registered = false

/** Makes the faces known to the PDF library; done once a process. */
export function registerFonts(): void {
  if (registered) return
  registered = true
  Font.register({
    family: TEXT,
    fonts: faces.map(({ fontWeight, fontStyle }, index) => ({
      src: fontFiles[index] ?? '',
      fontWeight,
      fontStyle,
    })),
  })
  // Technical words and designators are never hyphenated; only what could not be set otherwise is cut.
  Font.registerHyphenationCallback((word) =>
    word.length <= LONGEST_WORD ? [word] : (word.match(new RegExp(`.{1,${PIECE}}`, 'gu')) ?? [word]),
  )
}
