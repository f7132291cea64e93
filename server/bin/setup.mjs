import { spawnSync } from 'node:child_process'
import { createHash } from 'node:crypto'
import {
  accessSync,
  constants,
  existsSync,
  mkdirSync,
  readdirSync,
  readFileSync,
  writeFileSync,
} from 'node:fs'
import { delimiter, dirname, join } from 'node:path'

/*
 * Steps that stand before everything else and therefore use nothing but Node. Each is skipped when what it would
 * make is there already. They write to standard error only, so that a command's own output stays clean.
 */

export const root = join(import.meta.dirname, '../..')

const say = (text) => process.stderr.write(`${text}\n`)

function run(command, args, options = {}) {
  const result = spawnSync(command, args, { cwd: root, stdio: ['ignore', 2, 2], ...options })
  if (result.error) throw new Error(`${command} could not be started: ${result.error.message}`)
  return result.status ?? 1
}

function fail(sentence) {
  say(sentence)
  process.exit(1)
}

function* filesUnder(path) {
  for (const entry of readdirSync(path, { withFileTypes: true }).sort((a, b) => (a.name < b.name ? -1 : 1))) {
    const inner = join(path, entry.name)
    if (entry.isDirectory()) yield* filesUnder(inner)
    else if (entry.isFile()) yield inner
  }
}

function hashOf(paths) {
  const hash = createHash('sha256').update(process.version)
  for (const path of paths.map((name) => join(root, name))) {
    if (!existsSync(path)) continue
    const files = path.endsWith('.json') || path.endsWith('.ts') ? [path] : filesUnder(path)
    for (const file of files) hash.update(file.slice(root.length)).update('\0').update(readFileSync(file))
  }
  return hash.digest('hex')
}

const read = (path) => (existsSync(path) ? readFileSync(path, 'utf8') : '')

function stamp(path, text) {
  mkdirSync(dirname(path), { recursive: true })
  writeFileSync(path, text)
}

/** True when every package that the lock file asks for stands in node_modules in that version. */
function isInstalled() {
  const installed = join(root, 'node_modules/.package-lock.json')
  if (!existsSync(installed)) return false
  const have = JSON.parse(readFileSync(installed, 'utf8')).packages
  const want = JSON.parse(readFileSync(join(root, 'package-lock.json'), 'utf8')).packages
  return Object.entries(want).every(
    ([path, entry]) =>
      path === '' || entry.optional || entry.devOptional || have[path]?.version === entry.version,
  )
}

function checkNode() {
  const [major, minor] = process.versions.node.split('.').map(Number)
  const fits = (major === 20 && minor >= 19) || (major === 22 && minor >= 13) || major > 22
  if (!fits)
    fail(
      `This needs Node 20.19 or later in line 20, or 22.13 and later. This is Node ${process.versions.node}.`,
    )
}

/** Installs the packages of the lock file. */
export function ensureDeps() {
  checkNode()
  const mark = join(root, 'node_modules/.stamp')
  const wanted = hashOf(['package-lock.json'])
  if (read(mark) === wanted) return
  if (!isInstalled()) {
    say('Installing packages (about a minute) …')
    const prefix = join(process.execPath, '../..')
    const headers = existsSync(join(prefix, 'include/node/node_api.h')) ? { npm_config_nodedir: prefix } : {}
    const env = { ...process.env, ...headers }
    const status = run('npm', ['ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel=error'], { env })
    if (status !== 0) fail('The packages could not be installed; what npm said stands above.')
  }
  stamp(mark, wanted)
}

const common = ['shared', 'vite.config.ts', 'tsconfig.json', 'package.json', 'package-lock.json']
const parts = {
  client: { sources: ['client', ...common], args: [], made: 'dist/client/index.html', label: 'the pages' },
  server: {
    sources: ['server', ...common],
    args: ['--ssr'],
    made: 'dist/server/index.js',
    label: 'the server',
  },
}

/** Builds `client` or `server` where one of its sources changed. */
export function ensureBuild(name, { force = false } = {}) {
  const part = parts[name]
  const mark = join(root, `dist/${name}.stamp`)
  const wanted = hashOf(part.sources)
  if (!force && read(mark) === wanted && existsSync(join(root, part.made))) return
  say(`Building ${part.label} …`)
  const vite = join(root, 'node_modules/vite/bin/vite.js')
  const env = { ...process.env, NODE_ENV: 'production' }
  delete env.VITEST
  const status = run(process.execPath, [vite, 'build', ...part.args, '--logLevel', 'warn'], { env })
  if (status !== 0) fail(`Building ${part.label} failed; the reason stands above.`)
  stamp(mark, wanted)
}

function onPath(command) {
  return (process.env.PATH ?? '').split(delimiter).some((folder) => {
    try {
      accessSync(join(folder, command), constants.X_OK)
      return true
    } catch {
      return false
    }
  })
}

/** Sees to programs of the system: command → Debian package. */
export function ensureDebian(wanted) {
  const missing = Object.entries(wanted).filter(([command]) => !onPath(command))
  if (missing.length === 0) return
  const packages = missing.map(([, name]) => name)
  const canInstall = process.getuid?.() === 0 && onPath('apt-get')
  if (canInstall) {
    say(`Installing ${packages.join(', ')} …`)
    const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' }
    run('apt-get', ['-qq', 'update'], { env })
    run('apt-get', ['-qq', 'install', '-y', '--no-install-recommends', ...packages], { env })
  }
  const still = missing.filter(([command]) => !onPath(command))
  if (still.length > 0)
    fail(
      `The tests need ${still.map(([command]) => command).join(' and ')}: install the packages ` +
        `${still.map(([, name]) => name).join(' and ')} and start again.`,
    )
}
