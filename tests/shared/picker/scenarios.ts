import { evaluateForm, formRefs, type PickRequest, type ValueForm } from '#shared/amplifiers/picker/index.ts'
import { type SeriesName, standardValues } from '#shared/parts/series.ts'

/** A reproducible sequence of numbers in [0, 1): the 32-bit mixing generator of public knowledge ("mulberry"). */
export function seeded(seed: number): () => number {
  let state = seed >>> 0
  return () => {
    state = (state + 0x6d2b79f5) >>> 0
    let t = state
    t = Math.imul(t ^ (t >>> 15), t | 1)
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61)
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296
  }
}

type Random = () => number

const among = <T>(random: Random, choices: readonly T[]): T =>
  choices[Math.floor(random() * choices.length)] as T
const between = (random: Random, low: number, high: number): number => low + random() * (high - low)

/** Every form, with and without source and reference resistance, signals of either slope. */
export const formMakers: Record<string, (random: Random) => ValueForm> = {
  attenuator: (random) => ({ kind: 'attenuator', ...fromSource(random) }),
  'level shift': (random) => ({ kind: 'level-shift', ...fromSource(random), ...fromReference(random) }),
  'non-inverting': (random) => ({ kind: 'non-inverting', signal: ends(random) }),
  'non-inverting, offset up': (random) => ({
    kind: 'non-inverting-up',
    ...fromSource(random),
    ...fromReference(random),
  }),
  'non-inverting, offset down': (random) => ({
    kind: 'non-inverting-down',
    ...fromSource(random),
    ...fromReference(random),
  }),
  'weighted difference': (random) => ({
    kind: 'weighted-difference',
    ...fromSource(random),
    ...fromReference(random),
  }),
  inverting: (random) => ({ kind: 'inverting', ...fromSource(random) }),
  'inverting, offset up': (random) => ({
    kind: 'inverting-up',
    ...fromSource(random),
    ...fromReference(random),
  }),
  'inverting, offset down': (random) => ({
    kind: 'inverting-down',
    ...fromSource(random),
    ...fromReference(random),
  }),
  'difference on a fixed level': (random) => ({
    kind: 'difference',
    ...fromSource(random),
    level: { volts: among(random, [0, 1.25, 2.5]) },
  }),
  'difference on a divider': (random) => ({
    kind: 'difference',
    ...fromSource(random),
    level: fromReference(random),
  }),
  'gain pair on a fixed level': (random) => ({
    kind: 'gain-pair',
    signal: ends(random),
    stageGain: among(random, [1, 1, 2, 5]),
    level: { volts: among(random, [0, 1.25]) },
  }),
  'gain pair on a divider': (random) => ({
    kind: 'gain-pair',
    signal: ends(random),
    upper: 'R5',
    level: { ...fromReference(random), upper: 'R1', lower: 'R2' },
  }),
  'gain by one resistor on a fixed level': (random) => ({
    kind: 'gain-single',
    signal: ends(random),
    k: among(random, [49_400, 50_000, 100_000]),
    gainMinimum: among(random, [1, 5]),
    gainMaximum: 1000,
    level: { volts: among(random, [0, 1.25]) },
  }),
  'gain by one resistor on a divider': (random) => ({
    kind: 'gain-single',
    signal: ends(random),
    k: among(random, [49_400, 80_000]),
    stageGain: among(random, [1, 5]),
    level: fromReference(random),
  }),
  'two amplifiers with a gain resistor on a fixed level': (random) => ({
    kind: 'two-amplifier',
    signal: ends(random),
    withGainResistor: true,
    level: { volts: 0.5 },
  }),
  'two amplifiers with a gain resistor on a divider': (random) => ({
    kind: 'two-amplifier',
    signal: ends(random),
    withGainResistor: true,
    level: fromReference(random),
  }),
  'two amplifiers without one on a fixed level': (random) => ({
    kind: 'two-amplifier',
    signal: ends(random),
    withGainResistor: false,
    level: { volts: 0 },
  }),
  'two amplifiers without one on a divider': (random) => ({
    kind: 'two-amplifier',
    signal: ends(random),
    withGainResistor: false,
    level: fromReference(random),
  }),
}

function ends(random: Random): [number, number] {
  const one = among(random, [0, 0, -1, 0.2, -10, between(random, -3, 3)])
  const other = among(random, [1, 5, 0.02, 10, between(random, -3, 3)])
  const pair: [number, number] = one === other ? [one, one + 1] : [one, other]
  return random() < 0.5 ? pair : [pair[1], pair[0]]
}

function fromSource(random: Random): { signal: [number, number]; source: number } {
  return { signal: ends(random), source: among(random, [0, 0, 120, 1000]) }
}

function fromReference(random: Random): { reference: number; referenceResistance: number } {
  return {
    reference: among(random, [2.5, 4.096, 5, 1.2]),
    referenceResistance: among(random, [0, 0, 0, 35, 600]),
  }
}

export interface Window {
  series: SeriesName
  minimum: number
  maximum: number
}

/** Allowed values: a whole window, now and then a short stock, links and open places where they make sense. */
export function listsFor(
  form: ValueForm,
  random: Random,
  window: Window,
  special: boolean,
): Record<string, readonly number[]> {
  const all = standardValues(window.series, window.minimum, window.maximum)
  const lists: Record<string, readonly number[]> = {}
  for (const ref of formRefs(form)) {
    lists[ref] = all
    if (!special) continue
    const turn = random()
    if (turn < 0.15) lists[ref] = [among(random, all)]
    else if (turn < 0.3) lists[ref] = all.filter(() => random() < 0.4).concat([...all.slice(-1)])
    else if (turn < 0.45 && mayBeOpen(form, ref)) lists[ref] = [...all, Infinity]
    else if (turn < 0.6 && mayBeLink(form, ref)) lists[ref] = [0, ...all]
    else if (turn < 0.7) lists[ref] = all.slice(Math.floor(all.length / 3))
  }
  return lists
}

const OPEN: Partial<Record<ValueForm['kind'], string[]>> = {
  attenuator: ['R2'],
  'level-shift': ['R2', 'R3'],
  'non-inverting': ['Rg'],
  'non-inverting-up': ['R2', 'Rg'],
  'non-inverting-down': ['R2', 'Rg'],
  'weighted-difference': ['R4', 'R1'],
  'inverting-up': ['R2', 'Rg'],
  'inverting-down': ['Rs'],
  'gain-pair': ['Rg'],
  'gain-single': ['Rg'],
  'two-amplifier': ['Rg'],
}

const LINK: Partial<Record<ValueForm['kind'], string[]>> = {
  attenuator: ['R1'],
  'level-shift': ['R1'],
  'non-inverting': ['Rf'],
  'non-inverting-up': ['R1', 'Rf'],
  'non-inverting-down': ['R1', 'Rf', 'Rg'],
  'weighted-difference': ['R3', 'R2'],
  'inverting-up': ['R1', 'Rf'],
}

const mayBeOpen = (form: ValueForm, ref: string): boolean => OPEN[form.kind]?.includes(ref) ?? false
const mayBeLink = (form: ValueForm, ref: string): boolean => LINK[form.kind]?.includes(ref) ?? false

/** A target that some pick meets nearly, or (a quarter of them) anything: often out of reach, or of the wrong sense. */
export function targetFor(
  form: ValueForm,
  lists: Record<string, readonly number[]>,
  random: Random,
): [number, number] {
  for (let attempt = 0; attempt < 50 && random() < 0.97; attempt++) {
    const values: Record<string, number> = {}
    for (const [ref, list] of Object.entries(lists)) values[ref] = among(random, list)
    const [low, high] = evaluateForm(form, values)
    const span = Math.abs(high - low)
    if (!(span > 1e-4 && span < 100 && Math.abs(low) < 100)) continue
    if (random() < 0.25) break
    const off = among(random, [0, 0.001, 0.03])
    return [low + between(random, -off, off) * span, high + between(random, -off, off) * span]
  }
  const target: [number, number] = [between(random, -1, 1), between(random, 1.2, 5)]
  return random() < 0.5 ? target : [target[1], target[0]]
}

/** Demands on pairs: on those that the search can filter beforehand, and across them. */
export function demandsFor(
  form: ValueForm,
  window: Window,
  random: Random,
): NonNullable<PickRequest['pairs']> {
  const refs = formRefs(form)
  if (refs.length < 2) return []
  const middle = Math.sqrt(window.minimum * window.maximum)
  return Array.from({ length: 1 + Math.floor(random() * 2) }, () => {
    const one = among(random, refs)
    const other = among(
      random,
      refs.filter((ref) => ref !== one),
    )
    const turn = random()
    return {
      refs: [one, other] as [string, string],
      ...(turn < 0.4 ? { minimumSum: middle * between(random, 0.5, 4) } : {}),
      ...(turn > 0.3 && turn < 0.6 ? { minimumParallel: middle * between(random, 0.05, 0.6) } : {}),
      ...(turn > 0.5 ? { maximumParallel: middle * between(random, 0.2, 2) } : {}),
    }
  })
}

export function requestFor(
  form: ValueForm,
  random: Random,
  window: Window,
  options: { special?: boolean; demands?: boolean } = {},
): PickRequest {
  const lists = listsFor(form, random, window, options.special ?? false)
  const limit = among(random, [0.001, 0.01, 0.05])
  return {
    form,
    target: targetFor(form, lists, random),
    lists,
    ...(options.demands ? { pairs: demandsFor(form, window, random) } : {}),
    tolerance: Object.fromEntries(formRefs(form).map((ref) => [ref, limit])),
    preferred: among(random, [2_200, 10_000]),
  }
}
