import { StageBuilder, type AmplifierErrors, type Pin } from '#shared/amplifiers/stage-builder.ts'
import type { Design } from '#shared/design/schema.ts'
import type { NetworkBuilder } from '#shared/network/builder.ts'
import { designator, type FilterSpec, type SectionSpec } from './filter-spec.ts'

/** A node whose voltage moves volt for volt with the converter's pin (1) or against it (−1). */
export interface FollowingNode {
  node: string
  sign: 1 | -1
}

export interface BuiltFilter {
  pins: Pin[]
  errors: AmplifierErrors[]
  levels: { node: string; title: string; p: string; n: string | null }[]
  /** From the filter's input on. */
  following: FollowingNode[]
}

/** Adds the filter between node `from` and the converter's pin. Amplifiers are numbered on by `counter`. */
export function addFilter(
  builder: NetworkBuilder,
  counter: { amplifiers: number },
  design: Design,
  spec: FilterSpec,
  from: string,
): BuiltFilter {
  const built: BuiltFilter = { pins: [], errors: [], levels: [], following: [] }
  if (spec.kind === 'none') {
    // A chain without any part still needs its converter node: an ideal ammeter of 0 V joins it to the source.
    if (from !== 'adc') builder.voltageSource({ ref: 'VLINK', p: from, n: 'adc', value: 0, stage: 'filter' })
    built.following.push({ node: from, sign: 1 })
    return built
  }
  let at = from
  let sign: 1 | -1 = spec.dc.gain < 0 ? -1 : 1
  built.following.push({ node: at, sign })
  spec.sections.forEach((section, index) => {
    const stage = new StageBuilder(builder, counter, design, section.ref, '', {
      p: at,
      n: null,
      out: section.ref,
    })
    if (section.kind === 'sallen-key') {
      buildSallenKey(stage, section)
      built.following.push({ node: `${inner(section)}_p`, sign })
    } else {
      if (index === 0) buildLevel(stage, spec)
      buildMultipleFeedback(stage, section, levelNode(spec))
      sign = sign === 1 ? -1 : 1
    }
    built.pins.push(...stage.pins)
    built.errors.push(...stage.errors)
    built.levels.push({
      node: section.ref,
      title: `After filter section ${index + 1}`,
      p: section.ref,
      n: null,
    })
    built.following.push({ node: section.ref, sign })
    at = section.ref
  })
  const { tolerance, drift } = design.parts.resistors
  builder.resistor({
    ref: 'R9',
    a: at,
    b: 'adc',
    value: spec.drive.resistance,
    tolerance,
    drift,
    fixed: false,
    stage: 'filter',
  })
  addCapacitor(builder, design, 'C9', 'adc', '0', spec.drive.capacitance, 'filter')
  return built
}

/** Stem of a section's inner nodes: `f1`, told from the stage's own node by what follows it. */
const inner = ({ ref }: SectionSpec): string => ref.toLowerCase()

/** Named for people: drawings write it where several sections take it. */
const LEVEL = 'midlevel'

function levelNode({ level }: FilterSpec): string {
  return level?.kind === 'divider' ? LEVEL : level?.kind === 'reference' ? 'vref' : '0'
}

/** Designator and value of a part by its own name. */
const part = ({ parts, ref }: SectionSpec, name: string): [string, number] => {
  const own = designator(Number(ref.slice(1)), name)
  return [own, parts[own] ?? 0]
}

function buildSallenKey(stage: StageBuilder, section: SectionSpec): void {
  const [a, p] = [`${inner(section)}_a`, `${inner(section)}_p`]
  const { p: from, out } = stage.nodes
  resistor(stage, part(section, 'R1'), from, a)
  resistor(stage, part(section, 'R2'), a, p)
  capacitor(stage, part(section, 'C1'), a, out)
  capacitor(stage, part(section, 'C2'), p, '0')
  stage.amplifier(p, out, out)
}

function buildMultipleFeedback(stage: StageBuilder, section: SectionSpec, level: string): void {
  const [a, m] = [`${inner(section)}_a`, `${inner(section)}_m`]
  const { p: from, out } = stage.nodes
  resistor(stage, part(section, 'R1'), from, a)
  resistor(stage, part(section, 'R3'), out, a)
  resistor(stage, part(section, 'R2'), a, m)
  capacitor(stage, part(section, 'C1'), a, '0')
  capacitor(stage, part(section, 'C2'), out, m)
  stage.amplifier(level, m, out)
}

/** One level serves all sections. */
function buildLevel(stage: StageBuilder, { level }: FilterSpec): void {
  if (level?.kind !== 'divider') return
  resistor(stage, ['R10', level.upper], 'vref', LEVEL)
  resistor(stage, ['R11', level.lower], LEVEL, '0')
  capacitor(stage, ['C10', level.bypass], LEVEL, '0')
}

function resistor(stage: StageBuilder, [ref, value]: [string, number], a: string, b: string): void {
  stage.resistor(ref, a, b, value)
}

function capacitor(stage: StageBuilder, [ref, value]: [string, number], a: string, b: string): void {
  addCapacitor(stage.network, stage.design, ref, a, b, value, stage.stage)
}

function addCapacitor(
  builder: NetworkBuilder,
  design: Design,
  ref: string,
  a: string,
  b: string,
  value: number,
  stage: string,
): void {
  const { tolerance, drift } = design.parts.capacitors
  builder.capacitor({ ref, a, b, value, tolerance, drift, fixed: false, stage })
}
