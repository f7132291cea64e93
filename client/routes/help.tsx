import { Link } from 'react-router-dom'
import { RoomMark } from '#client/components/marks.tsx'
import { PageHead } from '#client/components/page.tsx'
import { usePageTitle } from '#client/hooks/use-page-title.ts'
import { paths } from '#client/lib/paths.ts'
import type { RoomState } from '#shared/design/plan.ts'

const states: readonly { state: RoomState; word: string; text: string }[] = [
  { state: 'clear', word: 'clear', text: 'the signal keeps more than the room your rule asks for' },
  { state: 'tight', word: 'tight', text: 'it stays within the limits, but closer than the rule' },
  { state: 'over', word: 'over', text: 'it passes a limit before the end of the required span' },
  { state: 'unknown', word: 'not known', text: 'an answer is missing, such as the converter range' },
]

const words: readonly [string, string][] = [
  ['Measurand', 'What is to be read: a level, a temperature, a flow. Figures are given in its own unit.'],
  ['Span', 'The range of the measurand that must be read, from the low end to the high end.'],
  ['Stage', 'A part of the circuit that does something: amplifies, shifts, filters.'],
  ['Node', 'The place after a stage where a level is read.'],
  ['Linear region', 'What a node allows, from its lower to its upper limit.'],
  ['Room', 'The gap between the signal and a limit, in per cent of the linear region, for the worst board.'],
  ['Clip', 'The value of the measurand at which the first limit is met.'],
  ['Finding', 'A sentence about something wrong: the place, the figure, the need, the shortfall.'],
]

const typed: readonly [string, string][] = [
  ['4k7, 4.7 kΩ, 4,7k, 4700', '4.7 kΩ: a letter may stand in place of the decimal sign (IEC 60062)'],
  ['R47, 4R7, 470R', '0.47 Ω, 4.7 Ω, 470 Ω'],
  ['4n7, 10p, u47', '4.7 nF, 10 pF, 470 nF'],
  ['4k7F, 4n7 K', '4.7 kΩ with 1 %, 4.7 nF with 10 %'],
  ['22m, 462m5, 4.625e-1', '22 mV, 0.4625 V, 0.4625 V; m is milli, M is mega'],
  ['=2*24k9/499R+1', '100.8: arithmetic after an equals sign'],
  ['1,000', 'asks once whether 1 or 1000 is meant, and remembers the sign'],
]

export function HelpPage() {
  usePageTitle('Help')
  return (
    <>
      <PageHead
        title="Help"
        say={
          <>
            Spandrel plans what lies between a sensor and a converter, and shows how much room is left at
            every node. <Link to={paths.keys}>All keys</Link>.{' '}
            <Link to={paths.preferences}>Units and keys</Link>.
          </>
        }
      />
      <div className="sheet mx-5 mb-6 grid gap-8 px-5 py-5 max-sm:mx-3 max-sm:px-3 lg:grid-cols-2">
        <section aria-labelledby="first">
          <h2 id="first">From span to design note</h2>
          <ol className="mt-2 list-decimal space-y-1 pl-5 text-14">
            <li>Type the span of the measurand and what the sensor gives at its two ends.</li>
            <li>Type the range of the converter, its bits and the rails.</li>
            <li>Take one of the arrangements in step 4; each says what it costs, or why it cannot work.</li>
            <li>
              Choose values in step 5, or fix values of a circuit that exists; the levels follow at once.
            </li>
            <li>Read the findings, then take the design note, the netlist and the parts list in step 8.</li>
          </ol>
          <p className="mt-3 text-14 text-ink-2">
            A visitor’s plan is kept in the browser. It moves into your workspace when you join or sign in.
          </p>
        </section>
        <section aria-labelledby="numbers">
          <h2 id="numbers">Typing numbers</h2>
          <dl className="ruled mt-2 text-13">
            {typed.map(([text, meaning]) => (
              <div key={text} className="grid gap-x-4 py-1 sm:grid-cols-[13rem_1fr]">
                <dt className="font-value">{text}</dt>
                <dd className="text-ink-2">{meaning}</dd>
              </div>
            ))}
          </dl>
        </section>
        <section aria-labelledby="marks">
          <h2 id="marks">Marks of room</h2>
          <dl className="ruled mt-2 text-13">
            {states.map(({ state, word, text }) => (
              <div key={state} className="grid grid-cols-[7rem_1fr] items-center gap-x-4 py-1.5">
                <dt className="flex items-center gap-2 font-value">
                  <RoomMark state={state} /> {word}
                </dt>
                <dd className="text-ink-2">{text}</dd>
              </div>
            ))}
          </dl>
        </section>
        <section aria-labelledby="words">
          <h2 id="words">Words</h2>
          <dl className="ruled mt-2 text-13">
            {words.map(([word, meaning]) => (
              <div key={word} className="grid gap-x-4 py-1 sm:grid-cols-[8rem_1fr]">
                <dt className="font-value">{word}</dt>
                <dd className="text-ink-2">{meaning}</dd>
              </div>
            ))}
          </dl>
        </section>
        <section aria-labelledby="bounds" className="lg:col-span-2">
          <h2 id="bounds">What it does not do</h2>
          <p className="mt-2 max-w-3xl text-14 text-ink-2">
            Spandrel plans the analog path only. Interlocks, flood or flame supervision, pressure relief,
            mains-referred or hazardous-area sensors, lines exposed to lightning, and medical or
            functional-safety use need isolation, intrinsic safety, surge protection or functional safety
            after the local codes and a licensed or certified practitioner.
          </p>
        </section>
      </div>
    </>
  )
}
