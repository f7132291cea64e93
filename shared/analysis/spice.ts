import { kindOf } from '#shared/network/elements/index.ts'
import { toSpiceNumber } from '#shared/network/elements/spice-number.ts'
import type { Network } from '#shared/network/types.ts'

/** What the simulator is asked: the operating point, or a sweep of frequency (Hz). */
export type SpiceAnalysis = 'op' | { ac: { pointsPerDecade: number; from: number; to: number } }

export interface SpiceOptions {
  /** Lines put below the title as comments. */
  comments?: readonly string[]
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
export function toSpice(network: Network, { comments = [], analysis = 'op' }: SpiceOptions = {}): string {
  const lines = [
    toAscii(network.title),
    ...comments.flatMap((comment) => comment.split(/\r?\n/).map((line) => `* ${toAscii(line)}`.trimEnd())),
    ...network.elements.flatMap((element) => kindOf(element).toSpice(element)),
    `.options temp=${toSpiceNumber(network.temperature)}`,
    toAnalysisLine(analysis),
    '.end',
  ]
  return `${lines.join('\n')}\n`
}

function toAnalysisLine(analysis: SpiceAnalysis): string {
  if (analysis === 'op') return '.op'
  const { pointsPerDecade, from, to } = analysis.ac
  return `.ac dec ${toSpiceNumber(pointsPerDecade)} ${toSpiceNumber(from)} ${toSpiceNumber(to)}`
}

function toAscii(text: string): string {
  return [...text].map((char) => SPELLED[char] ?? (/[ -~]/.test(char) ? char : '?')).join('')
}
