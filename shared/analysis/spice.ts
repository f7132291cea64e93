import { kindOf } from '#shared/network/elements/index.ts'
import { toSpiceNumber } from '#shared/network/elements/spice-number.ts'
import { GROUND, type Network } from '#shared/network/types.ts'

interface Sweep {
  pointsPerDecade: number
  /** Hz */
  from: number
  to: number
}

/** What the simulator is asked: the operating point, a sweep of frequency, or the noise at the network's output. */
export type SpiceAnalysis =
  | 'op'
  | { ac: Sweep }
  /** `input`: the source that the noise is referred to; it has to carry an `ac` amplitude. */
  | { noise: Sweep & { input: string } }

export interface SpiceOptions {
  /** Lines put below the title as comments. */
  comments?: readonly string[]
  /** Further lines behind the elements: noise sources, models. */
  extra?: readonly string[]
  /** Resistors (as they are printed, `R_U1_D`) that make no thermal noise. */
  noiseless?: (printed: string) => boolean
  analysis?: SpiceAnalysis
}

/** Symbols that a netlist of plain ASCII spells out. */
const SPELLED: Record<string, string> = {
  Ω: 'Ohm',
  µ: 'u',
  μ: 'u',
  '°': 'deg ',
  '−': '-',
  '–': '-',
  '—': '-',
  '…': '..',
  '±': '+/-',
  '×': 'x',
  '·': '*',
  '²': '^2',
  '√': 'sqrt ',
}

/**
 * The network as SPICE text: title, comments, one element a line (amplifiers as the same nominal model that the real
 * analyses solve), temperature and one analysis. Complete, plain ASCII, and of SPICE 3 elements only; every number is
 * printed so that it reads back as the same double.
 */
export function toSpice(network: Network, options: SpiceOptions = {}): string {
  const { comments = [], extra = [], noiseless = () => false, analysis = 'op' } = options
  const quieten = (line: string): string => {
    const ref = line.split(' ', 1)[0] ?? ''
    return ref.startsWith('R') && noiseless(ref) ? `${line} noisy=0` : line
  }
  const lines = [
    toAscii(network.title),
    ...comments.flatMap((comment) => comment.split(/\r?\n/).map((line) => `* ${toAscii(line)}`.trimEnd())),
    ...network.elements.flatMap((element) => kindOf(element).toSpice(element)).map(quieten),
    ...extra,
    `.options temp=${toSpiceNumber(network.temperature)}`,
    toAnalysisLine(network, analysis),
    '.end',
  ]
  return `${lines.join('\n')}\n`
}

function toAnalysisLine({ output: { p, n } }: Network, analysis: SpiceAnalysis): string {
  if (analysis === 'op') return '.op'
  if ('ac' in analysis) return `.ac ${toSweep(analysis.ac)}`
  return `.noise v(${n === GROUND ? p : `${p},${n}`}) ${analysis.noise.input} ${toSweep(analysis.noise)}`
}

const toSweep = ({ pointsPerDecade, from, to }: Sweep): string =>
  `dec ${[pointsPerDecade, from, to].map(toSpiceNumber).join(' ')}`

function toAscii(text: string): string {
  return [...text].map((char) => SPELLED[char] ?? (/[ -~]/.test(char) ? char : '?')).join('')
}
