import { spawn } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Plan } from '#shared/design/plan.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { buildDesign } from './support/builders.ts'

const root = join(import.meta.dirname, '../..')
let folder: string

beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'spandrel-plan-'))
})
afterAll(() => rmSync(folder, { recursive: true, force: true }))

interface Ended {
  code: number | null
  out: string
  err: string
}

/** The command as it stands in the sources; `npm run plan` builds it first and runs the same file. */
function plan(args: string[], input = ''): Promise<Ended> {
  const child = spawn(process.execPath, ['--import', 'tsx', join(root, 'server/plan-command.ts'), ...args], {
    cwd: root,
  })
  let out = ''
  let err = ''
  child.stdout.on('data', (chunk) => (out += String(chunk)))
  child.stderr.on('data', (chunk) => (err += String(chunk)))
  child.stdin.end(input)
  return new Promise((resolve) => child.on('close', (code) => resolve({ code, out, err })))
}

function save(name: string, content: unknown): string {
  const file = join(folder, name)
  writeFileSync(file, typeof content === 'string' ? content : JSON.stringify(content))
  return file
}

const same = (out: string, document: DesignDocument) =>
  expect(JSON.parse(out)).toEqual(JSON.parse(JSON.stringify(planDesign(document))))

describe('the plan command', () => {
  it('prints the plan and nothing else, and ends with 0 where it is feasible', async () => {
    const { code, out, err } = await plan([save('design.json', buildDesign())])
    expect(code).toBe(0)
    same(out, buildDesign())
    expect(err).toBe('')
  })

  it('reads standard input without a file', async () => {
    const { code, out } = await plan([], `\ufeff${JSON.stringify(buildDesign('From a pipe'))}`)
    expect(code).toBe(0)
    same(out, buildDesign('From a pipe'))
  })

  it('writes netlist and note beside it', async () => {
    const spice = join(folder, 'out.cir')
    const pdf = join(folder, 'note.pdf')
    const { code, out, err } = await plan([save('both.json', buildDesign()), '--spice', spice, '--pdf', pdf])
    expect(code).toBe(0)
    const printed = JSON.parse(out) as Plan
    expect(readFileSync(spice, 'utf8')).toBe(printed.candidates[printed.chosen ?? -1]?.netlist)
    expect(readFileSync(pdf).subarray(0, 5).toString()).toBe('%PDF-')
    expect(err).toContain('Written:')
  })

  it('checks the plan in the simulator on request: in the plan, and as a table beside it', async () => {
    const { code, out, err } = await plan([save('checked.json', buildDesign()), '--check'])
    expect(code).toBe(0)
    const printed = JSON.parse(out) as Plan
    const check = printed.candidates[printed.chosen ?? -1]?.check
    expect(check?.ok).toBe(true)
    expect(check?.lines.length).toBeGreaterThanOrEqual(7)
    for (const line of check?.lines ?? []) expect(err).toContain(line.what)
    expect(err).toContain('The simulator agrees.')
    const { check: _, ...rest } = printed.candidates[printed.chosen ?? -1] ?? {}
    expect(rest).toEqual(
      JSON.parse(JSON.stringify(planDesign(buildDesign()).candidates[printed.chosen ?? -1])),
    )
  })

  it('says so where there is nothing to check, with the code unchanged', async () => {
    const design: DesignDocument = { ...buildDesign(), rails: { positive: 0.5 } }
    const { code, err } = await plan([save('nothing.json', design), '--check'])
    expect(code).toBe(1)
    expect(err).toContain('No check: nothing was chosen.')
  })

  it('prints the plan all the same where nothing is feasible, and ends with 1', async () => {
    const design: DesignDocument = {
      ...buildDesign(),
      rails: { positive: 0.5 },
      choose: { arrangement: 'direct' },
    }
    const { code, out, err } = await plan([save('infeasible.json', design)])
    expect(code).toBe(1)
    same(out, design)
    expect(err).toMatch(/not feasible|No arrangement is feasible/)
  })

  it('ends with 2 and one line a fault where the design is refused, and prints no plan', async () => {
    const wrong = {
      ...buildDesign(),
      rails: { positive: -5, negative: 5 },
      converter: { input: { low: 0, high: 0 }, bits: 12 },
    }
    const { code, out, err } = await plan([save('wrong.json', wrong)])
    expect(code).toBe(2)
    expect(out).toBe('')
    const lines = err.trimEnd().split('\n')
    expect(lines.length).toBeGreaterThanOrEqual(2)
    for (const line of lines) expect(line).toMatch(/^[\w.[\]]+: .+; accepted: .+$/)
    expect(lines.some((line) => line.startsWith('rails.positive: '))).toBe(true)
  })

  it.each([
    ['a file that does not exist', ['nowhere.json'], ''],
    ['text that is not JSON', [], 'format: spandrel'],
    ['nothing at all', [], ''],
    ['an unknown option', ['--colour', 'red'], ''],
    ['two files', ['a.json', 'b.json'], ''],
    ['an option without its file', ['--pdf'], ''],
  ])('ends with 2 over %s', async (_, args, input) => {
    const { code, out, err } = await plan(args, input)
    expect(code).toBe(2)
    expect(out).toBe('')
    expect(err).toMatch(/^.+: .+; accepted: .+\n$/)
  })
})
