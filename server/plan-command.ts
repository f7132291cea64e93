import { readFile, writeFile } from 'node:fs/promises'
import { text } from 'node:stream/consumers'
import { parseArgs } from 'node:util'
import type { Fault, IndependentCheck, Plan } from '#shared/design/plan.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import { readDesign } from '#shared/design/read.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { checkChosen, withCheck } from '#shared/studies/check.ts'
import { draftContext } from './features/note/note-context.ts'

const usage = 'npm run --silent plan -- [design.json] [--spice out.cir] [--pdf note.pdf] [--check]'

const exitCode = { feasible: 0, infeasible: 1, refused: 2 } as const

const say = (line: string): void => {
  process.stderr.write(`${line}\n`)
}

/** Something about the call itself: told in one line, as a refused design is. */
class CallRefused extends Error {}

interface Options {
  file: string | null
  spice: string | undefined
  pdf: string | undefined
  check: boolean
}

function readOptions(args: string[]): Options {
  try {
    const { values, positionals } = parseArgs({
      args,
      allowPositionals: true,
      options: {
        spice: { type: 'string' },
        pdf: { type: 'string' },
        check: { type: 'boolean', default: false },
      },
    })
    if (positionals.length > 1) throw new CallRefused(`command: more than one file; accepted: ${usage}`)
    return { file: positionals[0] ?? null, spice: values.spice, pdf: values.pdf, check: values.check }
  } catch (error) {
    if (error instanceof CallRefused) throw error
    const reason = (error as Error).message.split('. ')[0]
    throw new CallRefused(`command: ${reason}; accepted: ${usage}`, { cause: error })
  }
}

async function readSource(file: string | null): Promise<unknown> {
  let source: string
  try {
    source = file === null || file === '-' ? await text(process.stdin) : await readFile(file, 'utf8')
  } catch (error) {
    const reason =
      (error as NodeJS.ErrnoException).code === 'ENOENT' ? 'there is no such file' : 'it cannot be read'
    throw new CallRefused(`${file}: ${reason}; accepted: a design file`, { cause: error })
  }
  try {
    return JSON.parse(source.replace(/^\ufeff/, '')) as unknown
  } catch (error) {
    const reason = (error as Error).message
    throw new CallRefused(`${file ?? 'standard input'}: not JSON (${reason}); accepted: one JSON object`, {
      cause: error,
    })
  }
}

const faultLine = ({ path, reason, accepted }: Fault): string =>
  `${path || 'design'}: ${reason}; accepted: ${accepted}`

async function save(file: string, content: string | Buffer): Promise<void> {
  try {
    await writeFile(file, content)
    say(`Written: ${file}`)
  } catch (error) {
    throw new CallRefused(`${file}: it cannot be written; accepted: a file in a folder that exists`, {
      cause: error,
    })
  }
}

async function savePdf(file: string, document: DesignDocument, plan: Plan): Promise<void> {
  const { renderNote } = await import('#server/documents/render-note.ts')
  const date = new Date().toISOString().slice(0, 10)
  const context = draftContext({
    workspaceName: 'Visitor',
    authorName: 'Visitor',
    date,
    paper: 'A4',
    demo: false,
  })
  await save(file, await renderNote({ document, plan, context }))
}

async function checkedPlan(document: DesignDocument): Promise<Plan> {
  const { openSimulator } = await import('#server/lib/simulator.ts')
  const plan = planDesign(document)
  return withCheck(plan, await checkChosen(document, plan, openSimulator()))
}

/** The check as a table: what, ours, the simulator's, how far apart, how far they may be. */
function sayCheck(check: IndependentCheck | undefined): void {
  if (!check) {
    say('No check: nothing was chosen.')
    return
  }
  const rows = check.lines.map(({ what, unit, ours, spice, difference, allowed, ok }) => [
    what,
    String(ours),
    String(spice),
    `${difference} ${unit}`,
    `${allowed} ${unit}`,
    ok ? 'agrees' : 'DIFFERS',
  ])
  const table = [['Figure', 'plan', check.simulator, 'difference', 'allowed', ''], ...rows]
  const widths = table[0]?.map((_, at) => Math.max(...table.map((row) => row[at]?.length ?? 0))) ?? []
  for (const row of table)
    say(
      row
        .map((cell, at) => cell.padEnd(widths[at] ?? 0))
        .join('  ')
        .trimEnd(),
    )
  say(
    check.ok ? 'The simulator agrees.' : 'The simulator does not agree: a defect of the plan. Do not use it.',
  )
}

/** Large plans do not fit a pipe at once: wait until all of it is written. */
function print(plan: Plan): Promise<void> {
  return new Promise((resolve, reject) => {
    process.stdout.write(`${JSON.stringify(plan, null, 2)}\n`, (error) => (error ? reject(error) : resolve()))
  })
}

/** `npm run plan`: the plan on standard output, everything else on standard error. Answers the exit code. */
async function run(args: string[]): Promise<number> {
  const options = readOptions(args)
  const read = readDesign(await readSource(options.file))
  if (!read.ok) {
    for (const fault of read.faults) say(faultLine(fault))
    return exitCode.refused
  }
  const plan = options.check ? await checkedPlan(read.document) : planDesign(read.document)
  const chosen = plan.chosen === null ? undefined : plan.candidates[plan.chosen]
  await print(plan)
  if (options.check) sayCheck(chosen?.check)
  if (options.spice !== undefined) {
    if (chosen?.netlist === undefined) say('No netlist: nothing feasible was chosen.')
    else await save(options.spice, chosen.netlist)
  }
  if (options.pdf !== undefined) await savePdf(options.pdf, read.document, plan)
  if (chosen?.feasible) return exitCode.feasible
  for (const candidate of plan.candidates)
    for (const { text: reason } of candidate.reasons) say(`${candidate.arrangement}: ${reason}`)
  say(
    chosen
      ? 'The arrangement that the design fixes is not feasible.'
      : 'No arrangement is feasible for this design.',
  )
  return exitCode.infeasible
}

run(process.argv.slice(2)).then(
  (code) => process.exit(code),
  (error: unknown) => {
    say(
      error instanceof CallRefused
        ? error.message
        : `The plan failed: ${(error as Error).stack ?? String(error)}`,
    )
    process.exit(exitCode.refused)
  },
)
