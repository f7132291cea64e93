import { CurveFigure } from '#client/components/drawings/curve-figure.tsx'
import { usePreferences } from '#client/lib/preferences.ts'
import type { NoiseSummary } from '#shared/design/plan.ts'
import { noisePlot } from '#shared/drawings/curve-inputs.ts'
import { figure, upward } from '#shared/note/figures.ts'
import { toNoiseTable } from '#shared/note/quality-tables.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { CurvesPart } from '../curves-part.tsx'
import { Fold } from '../fold.tsx'
import { NoteTable } from '../note-table.tsx'

/** 0 °C in K. */
const KELVIN = 273.15

/** Noise over the real response: how many bits it leaves, and who makes it. */
export function NoisePanel({ noise }: { noise: NoiseSummary }) {
  const { decimalSign = '.' } = usePreferences()
  const bits = (value: number) => formatQuantity(value, '', { digits: 3, rounding: 'down' })
  const dominant = noise.lines.find((line) => line.id === noise.dominant)
  return (
    <section aria-label="Noise">
      <h2>Noise</h2>
      <dl className="figures-list">
        <div>
          <dt>At the converter, rms</dt>
          <dd>{upward(noise.rms, 'V')}</dd>
        </div>
        <div>
          <dt>Of it the circuit alone</dt>
          <dd>{upward(noise.circuit, 'V')}</dd>
        </div>
        <div>
          <dt>Full span against it</dt>
          <dd>{formatQuantity(noise.snr, 'dB', { digits: 3, rounding: 'down' })}</dd>
        </div>
        <div>
          <dt>Effective bits</dt>
          <dd>{bits(noise.effectiveBits)}</dd>
        </div>
        <div>
          <dt>Noise-free bits</dt>
          <dd>{bits(noise.noiseFreeBits)}</dd>
        </div>
        <div>
          <dt>Largest source</dt>
          <dd>{dominant?.label ?? noise.dominant}</dd>
        </div>
      </dl>
      <Fold
        title="Sources and spectrum"
        say={`from ${figure(noise.from, 'Hz')} up, at ${formatQuantity(noise.temperature - KELVIN, '°C', { digits: 3 })}`}
      >
        <NoteTable caption="Sources of noise, largest first" table={toNoiseTable(noise)} />
        <CurvesPart what="The noise spectrum">
          {(curves) => (
            <CurveFigure
              title="Noise spectrum"
              caption="density at the converter, all sources and the largest few"
              named={noisePlot(curves.noise, decimalSign)}
            >
              <p className="field-note">
                Converter noise and quantisation are known as one figure each and have no spectrum here.
              </p>
            </CurveFigure>
          )}
        </CurvesPart>
      </Fold>
    </section>
  )
}
