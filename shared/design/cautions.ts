import { kindOf } from '#shared/sensors/index.ts'
import type { Plan } from './plan.ts'
import type { Design } from './schema.ts'

const GENERAL = {
  code: 'scope',
  text: 'Spandrel plans the analog path only. Isolation, intrinsic safety, surge protection and functional safety follow the local codes and a licensed or certified practitioner.',
}

/** Words in names that point to duties beyond the analog path; whoever names a channel so should read the sentence. */
const TOPICS: { code: string; words: RegExp; text: string }[] = [
  {
    code: 'flame-supervision',
    words: /flame|burner|flue|boiler|furnace/i,
    text: 'Flame and burner supervision: an interlock follows its own code and approval; do not let this channel carry it.',
  },
  {
    code: 'flood-supervision',
    words: /flood|stilling|river|level|dam\b/i,
    text: 'Flood or level alarms that protect people or plant need an independent, approved channel.',
  },
  {
    code: 'pressure-relief',
    words: /pressure relief|overpressure|vessel/i,
    text: 'Pressure relief follows its own code; this channel is no part of it.',
  },
  {
    code: 'mains',
    words: /mains|line voltage|230 ?V|400 ?V/i,
    text: 'Mains-referred sensors need isolation rated for the installation, by a licensed practitioner.',
  },
  {
    code: 'outdoor',
    words: /mast|outdoor|weather|wind|gauging/i,
    text: 'Outdoor runs can carry lightning surges: surge protection and earthing follow the local codes.',
  },
  {
    code: 'medical',
    words: /patient|medical|clinical/i,
    text: 'Medical use falls under its own safety standards, which this plan does not address.',
  },
]

/** The cautions that belong on this design's first sheet and beside the inputs that raise them. */
export function cautionsFor(design: Design): Plan['cautions'] {
  const named = `${design.name} ${design.sensor.quantity.name}`
  return [
    GENERAL,
    ...TOPICS.filter((topic) => topic.words.test(named)).map(({ code, text }) => ({ code, text })),
    ...kindOf(design.sensor)
      .cautions(design.sensor)
      .map(({ code, text }) => ({ code, text })),
  ]
}
