import type { Change } from '../draft/draft-state.ts'
import { getAt, type DraftDocument } from '../draft/paths.ts'

/**
 * Keys that only make sense together. Whoever changes one does not have to know of the other: it goes along in the
 * same undo step.
 */
type Rule = (value: unknown, document: DraftDocument) => Change[]

const drop = (path: string): Change => ({ path, value: undefined })

const isSections = (kind: unknown): boolean => kind === 'sallen-key' || kind === 'multiple-feedback'

const kindFor = (value: unknown, document: DraftDocument, kind: string): Change[] =>
  value !== undefined && getAt(document, 'choose.filter.kind') === undefined
    ? [{ path: 'choose.filter.kind', value: kind }]
    : []

const rules: Readonly<Record<string, Rule>> = {
  // A single-ended signal has no common mode.
  'sensor.wiring': (value) => (value === 'differential' ? [] : [drop('sensor.commonMode')]),
  // What is the same source has no voltage of its own.
  'shiftReference.same': (value) => (value === undefined ? [] : [drop('shiftReference.voltage')]),
  'sensor.excitation.same': (value) => (value === undefined ? [] : [drop('sensor.excitation.voltage')]),
  'converter.reference.same': (value, document) =>
    value === 'positive'
      ? [{ path: 'converter.reference.voltage', value: getAt(document, 'rails.positive') }]
      : [],
  'rails.positive': (value, document) =>
    getAt(document, 'converter.reference.same') === 'positive'
      ? [{ path: 'converter.reference.voltage', value }]
      : [],
  // Without a kind there is no filter to speak of; a corner asks for one, a response or an order for sections.
  'choose.filter.corner': (value, document) => kindFor(value, document, 'rc'),
  'choose.filter.response': (value, document) => kindFor(value, document, 'sallen-key'),
  'choose.filter.order': (value, document) => kindFor(value, document, 'sallen-key'),
  'choose.filter.kind': (value) =>
    value === undefined
      ? [drop('choose.filter')]
      : [
          ...(value === 'none' ? [drop('choose.filter.corner')] : []),
          ...(isSections(value) ? [] : [drop('choose.filter.response'), drop('choose.filter.order')]),
        ],
  // Without a number of channels there is no multiplexer to have a resistance.
  'converter.multiplexed.channels': (value) => (value === undefined ? [drop('converter.multiplexed')] : []),
  // A modulator and its digital filter belong to one kind of converter only.
  'converter.architecture': (value) =>
    value === 'oversampling'
      ? []
      : ['modulatorRate', 'digitalFilter', 'outputRate'].map((key) => drop(`converter.${key}`)),
}

/** `inUse`: the arrangement that the plan stands on at present, where there is one. */
export const companionsOf = (
  path: string,
  value: unknown,
  document: DraftDocument,
  inUse?: string,
): Change[] =>
  rules[path]?.(value, document) ?? (path.startsWith(VALUES) ? keepArrangement(value, document, inUse) : [])

const VALUES = 'choose.values.'

/** A value belongs to the arrangement that it is fixed for: the plan must not take another one on its account. */
function keepArrangement(value: unknown, document: DraftDocument, inUse: string | undefined): Change[] {
  if (value === undefined || inUse === undefined || getAt(document, 'choose.arrangement') !== undefined)
    return []
  return [{ path: 'choose.arrangement', value: inUse }, drop('choose.pick')]
}

/** Fields that do not apply as the draft stands; they are left out of the form unless something stands in them. */
export function appliesTo(path: string, document: DraftDocument): boolean {
  if (getAt(document, path) !== undefined) return true
  if (path === 'sensor.commonMode') return getAt(document, 'sensor.wiring') === 'differential'
  if (path === 'shiftReference.voltage') return getAt(document, 'shiftReference.same') === undefined
  if (path === 'sensor.excitation.voltage') return getAt(document, 'sensor.excitation.same') === undefined
  if (path === 'choose.filter.response' || path === 'choose.filter.order')
    return isSections(getAt(document, 'choose.filter.kind'))
  if (path === 'choose.filter.corner') return getAt(document, 'choose.filter.kind') !== 'none'
  if (path === 'converter.multiplexed.resistance')
    return getAt(document, 'converter.multiplexed.channels') !== undefined
  if (/^converter\.(modulatorRate|digitalFilter|outputRate)$/.test(path))
    return getAt(document, 'converter.architecture') === 'oversampling'
  return true
}
