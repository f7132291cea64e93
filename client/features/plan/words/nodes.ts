import { stepOfPath } from './steps.ts'

/** Node of the level diagram that a path of the design has to do with: it wears the arch while its field is edited. */
export function nodeOfPath(path: string): string | null {
  if (path.startsWith('sensor.') || path === 'sensor') return 'sensor'
  if (path.startsWith('converter') || path.startsWith('choose.filter') || path.startsWith('choose.drive'))
    return 'adc'
  const stage = /^choose\.stages\.(\d+)/.exec(path)
  if (stage) return `S${Number(stage[1]) + 1}`
  const part = /^choose\.values\.(.+)$/.exec(path)
  if (part) return /^[RC]9$/.test(part[1] ?? '') ? 'adc' : (part[1] ?? '').endsWith('B') ? 'S2' : 'S1'
  return stepOfPath(path) === 'stages' ? 'S1' : null
}

/** The field that sets a limit or a level of a node. */
export function pathOfNode(node: string, limit: 'region' | 'signal', lastStage: string | null): string {
  if (node === 'sensor') return limit === 'signal' ? 'sensor.output.high' : 'sensor.output'
  if (node === 'adc') return limit === 'region' ? 'converter.input.high' : 'converter.guard'
  if (limit === 'region') return 'rails.positive'
  return node === lastStage ? 'choose.values' : 'choose.stages'
}
