import { writeFileSync } from 'node:fs'
import { renderNote } from '#server/documents/render-note.ts'
import { sampleContext, sampleDocument, samplePlan, infeasiblePlan, buildStressPlan } from '#tests/shared/note/sample.ts'
const t = Date.now()
for (const paper of ['A4','Letter'] as const)
for (const [n, plan] of Object.entries({ sample: samplePlan, infeasible: infeasiblePlan, stress: buildStressPlan() })) {
  const t = performance.now()
  writeFileSync(`/tmp/note/${n}-${paper}.pdf`, await renderNote({ document: n==='stress' ? {...sampleDocument, name: 'Stilling-well level at gauging station 4, backup of the conductivity transmitter behind the boiler house, second channel'} : sampleDocument, plan, context: { ...sampleContext, paper } }))
  console.log(n, paper, Math.round(performance.now() - t))
}
