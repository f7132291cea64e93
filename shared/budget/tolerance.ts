import type { PortName } from '#shared/network/elements/element-kind.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import { computeSensitivities, type Sensitivity } from '#shared/analysis/sensitivity.ts'
import type { SourceVariable } from '#shared/analysis/extremes.ts'
import { temperatureSpan } from '#shared/design/references.ts'
import type { Chain } from '#shared/design/chain.ts'
import type { Candidate, Ends, ToleranceLine } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'

/**
 * What each uncertain input does to y at the two ends, to first order: sensitivities by the adjoint network times the
 * limit, all effects of one variable summed before anything is squared (method: tolerance statistics), so that a shared
 * reference cancels by itself. y = v·Vref,nominal/Vref adds −v/Vref to the sensitivity of the converter's reference.
 * Worst case is the sum of magnitudes, rss the root of the sum of squares of the limits. V of y.
 */
export function firstOrderTolerance(
  design: Design,
  chains: { low: Chain; high: Chain },
): NonNullable<Candidate['tolerance']> {
  const low = linesAt(design, chains.low)
  const high = linesAt(design, chains.high)
  const lines = low.map((line): ToleranceLine => {
    const other = high.find((l) => l.id === line.id)
    return { ...line.head, id: line.id, low: line.change, high: other?.change ?? 0 }
  })
  const missing = high.filter((line) => !low.some((l) => l.id === line.id))
  lines.push(
    ...missing.map((line): ToleranceLine => ({ ...line.head, id: line.id, low: 0, high: line.change })),
  )
  lines.sort((a, b) => size(b) - size(a))
  const sum = (f: (x: number) => number, end: 'low' | 'high') =>
    lines.reduce((total, line) => total + f(line[end]), 0)
  const ends = (f: (end: 'low' | 'high') => number): Ends => ({ low: f('low'), high: f('high') })
  return {
    lines: lines.filter((line) => size(line) > 0),
    worst: ends((end) => sum(Math.abs, end)),
    rss: ends((end) => Math.sqrt(sum((x) => x * x, end))),
  }
}

const size = (line: Ends): number => Math.max(Math.abs(line.low), Math.abs(line.high))

interface Line {
  id: string
  head: Pick<ToleranceLine, 'label' | 'source' | 'limit' | 'unit'>
  change: number
}

function linesAt(design: Design, chain: Chain): Line[] {
  const found = computeSensitivities(chain.network, {
    model: 'real',
    references: Object.fromEntries(chain.errors.map((e) => [e.ref, e.reference])),
  })
  const slopes = new Map(found.map((s) => [`${s.ref}/${s.port}`, s.derivative]))
  const slope = (ref: string, port: Sensitivity['port']) => slopes.get(`${ref}/${port}`) ?? 0
  return [
    ...resistorLines(design, chain, slope),
    ...chain.variables
      .filter((v) => v.id !== chain.signal.variable)
      .flatMap((v) => variableLine(chain, v, slope)),
    ...chain.errors.map((e): Line => ({
      id: `${e.ref}.cmrr`,
      head: { label: `${shown(e.ref)} common-mode rejection`, source: shown(e.ref), limit: e.cmrr, unit: '' },
      change: slope(e.ref, 'cmrr') * e.cmrr,
    })),
  ]
}

type Slope = (ref: string, port: PortName) => number

function resistorLines(design: Design, chain: Chain, slope: Slope): Line[] {
  const span = temperatureSpan(design)
  return chain.network.elements.flatMap((e): Line[] => {
    if (e.kind !== 'resistor' || e.tolerance + e.drift === 0) return []
    const per = slope(e.ref, 'value') * e.value
    const line = (id: string, label: string, limit: number): Line => ({
      id: `${e.ref}.${id}`,
      head: { label: `${e.ref} ${label}`, source: e.ref, limit, unit: '' },
      change: per * limit,
    })
    return [
      line('initial', e.group === 'internal' ? 'gain error of the part' : 'tolerance', e.tolerance),
      ...(e.drift > 0 ? [line('temperature', 'over temperature', e.drift * span)] : []),
    ]
  })
}

function variableLine(chain: Chain, variable: SourceVariable, slope: Slope): Line[] {
  const half = Math.max(variable.high - variable.nominal, variable.nominal - variable.low)
  if (half === 0) return []
  const direct = variable.injections.reduce((sum, i) => sum + i.scale * slope(i.ref, i.port), 0)
  const reference = chain.references.converter
  const ratio =
    reference?.variable === variable.id
      ? -solveDc(chain.network, { model: 'real' }).output / reference.voltage
      : 0
  return [
    {
      id: variable.id,
      head: {
        label: labelOf(variable.id),
        source: sourceOf(variable.id),
        limit: half,
        unit: unitOf(variable.id),
      },
      change: (direct + ratio) * half,
    },
  ]
}

const names: Record<string, string> = {
  converterReference: 'Converter reference',
  shiftReference: 'Shift reference',
  positiveRail: 'Positive rail',
  negativeRail: 'Negative rail',
  excitation: 'Excitation',
  commonMode: 'Common mode of the sensor',
  'sensor.zero': 'Sensor zero',
  'sensor.span': 'Sensor span',
  'sensor.linearity': 'Sensor linearity',
  'sensor.repeatability': 'Sensor repeatability',
  'converter.inputCurrent': 'Converter input current',
}

const effects: Record<string, string> = {
  vos: 'offset voltage',
  ib: 'bias current',
  ios: 'offset current',
  psrr: 'supply rejection',
}

function labelOf(id: string): string {
  const known = names[id]
  if (known) return known
  const [ref = '', effect = ''] = id.split('.')
  return `${shown(ref)} ${effects[effect] ?? effect}`
}

/** An integrated part carries its errors in one of its two input amplifiers; people know it by one designator. */
const shown = (ref: string): string => (/^U\d+B$/.test(ref) ? ref.slice(0, -1) : ref)

const sourceOf = (id: string): string => (names[id] ? id : shown(id.split('.')[0] ?? id))

const unitOf = (id: string): string => (/\.(ib|ios|inputCurrent)$/.test(id) ? 'A' : 'V')
