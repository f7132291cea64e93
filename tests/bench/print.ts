import { run as runPicker, type Row } from './picker.bench.ts'
import { run as runPlan } from './plan.bench.ts'

/** Prints each row with what is required of it; says plainly where it falls short. Never fails a build. */
function print(title: string, rows: Row[]): void {
  console.log(`\n${title}`)
  for (const { what, value, unit, required, met } of rows) {
    const figure = `${Number(value.toPrecision(3)).toLocaleString('en')} ${unit}`
    const verdict = met === null ? '' : met ? `  met: ${required}` : `  SHORT: ${required} required`
    console.log(`  ${what.padEnd(72)} ${figure.padStart(16)}${verdict}`)
  }
}

print('Picker', runPicker())
print('Whole plan', runPlan())
