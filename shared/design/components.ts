import { sectionNumber } from '#shared/filters/filter-spec.ts'
import { kindOf as elementKind } from '#shared/network/elements/index.ts'
import type { Component } from './plan.ts'
import type { Trial } from './settle.ts'
import type { Design } from './schema.ts'

/** Parts list of a trial, in the order of the network: what is bought, and with `fixed` what belongs to other parts. */
export function componentsOf(design: Design, trial: Trial): Component[] {
  const { elements } = trial.assessment.chains.low.network
  const fixedByPerson = new Set(Object.keys(design.choose.values ?? {}))
  const list: Component[] = []
  const macros = new Set<string>()
  for (const e of elements) {
    const nodes = elementKind(e).nodes(e)
    const common = { ref: e.ref, nodes, stage: e.stage, chosen: fixedByPerson.has(e.ref) }
    if (e.kind === 'resistor' || e.kind === 'capacitor') {
      const wanted = wantedFor(trial, e.ref)
      list.push({
        ...common,
        kind: e.kind,
        value: e.value,
        tolerance: e.tolerance,
        fixed: e.fixed,
        group: e.kind === 'resistor' ? e.group : null,
        sets: roleOf(trial, e.ref, e.stage),
        ...(wanted === undefined ? {} : { wanted }),
      })
    } else if (e.kind === 'amplifier' && !e.macro) {
      list.push({
        ...common,
        kind: 'amplifier',
        name: e.part.name,
        fixed: false,
        group: null,
        sets: e.stage === 'level' ? 'Buffers the level' : amplifierRole(e.stage),
      })
    } else if (e.kind === 'amplifier' && e.macro && !macros.has(e.macro)) {
      macros.add(e.macro)
      list.push({
        ...common,
        ref: e.macro,
        kind: 'instrumentation-amplifier',
        name: e.part.name,
        nodes: macroNodes(trial, e.macro),
        fixed: false,
        group: null,
        sets: `Amplifier, ${e.stage}`,
      })
    }
  }
  return list
}

/** Outer nodes of an integrated part: − input, + input, output, reference pin. */
function macroNodes(trial: Trial, macro: string): string[] {
  const { elements } = trial.assessment.chains.low.network
  const inputs = elements.flatMap((e) => (e.kind === 'amplifier' && e.macro === macro ? [e.p] : []))
  const output = elements.find((e) => e.ref === `E${macro}`)
  return output?.kind === 'controlled-voltage-source' ? [...inputs, output.p, output.n] : inputs
}

function stageOf(trial: Trial, ref: string) {
  const second = trial.stages[1]
  if (second && ref.endsWith('B') && second.arrangement.roles[ref.slice(0, -1)] !== undefined)
    return { stage: second, own: ref.slice(0, -1) }
  const first = trial.stages[0]
  return first && first.arrangement.roles[ref] !== undefined ? { stage: first, own: ref } : null
}

function wantedFor(trial: Trial, ref: string): number | undefined {
  const { drive, sections } = trial.spec.filter
  if (ref === 'R9') return drive.wantedResistance || undefined
  for (const section of sections) if (section.parts[ref] !== undefined) return section.wantedParts[ref]
  const found = stageOf(trial, ref)
  return found?.stage.sized.wanted()[found.own]
}

function amplifierRole(stage: string): string {
  const section = sectionNumber(stage)
  return section === null ? `Amplifier, ${stage}` : `Filter, section ${section}`
}

function roleOf(trial: Trial, ref: string, stage: string): string {
  const found = stageOf(trial, ref)
  if (found) {
    const role = found.stage.arrangement.roles[found.own] ?? ''
    return trial.stages.length > 1 ? `${role}, ${found.stage.ref}` : role
  }
  if (ref === 'R9') return 'Filter and drive, series'
  if (ref === 'C9') return 'Filter and drive, reservoir'
  const section = sectionNumber(stage)
  if (section !== null && !/^CU\d+$/.test(ref))
    return /^[RC]1[01]$/.test(ref) ? 'Filter, level' : `Filter, section ${section}`
  if (ref === 'RADC') return 'Input resistance of the converter'
  if (stage === 'source') return ref.startsWith('RSENSE') ? 'Sensor' : 'Source resistance'
  if (stage === 'supply') return 'Output resistance of the reference'
  if (/^CU\d+$/.test(ref)) return `Steadies ${ref.slice(1)}`
  return 'Inside the amplifier'
}
