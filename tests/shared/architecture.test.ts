import { describe, expect, it } from 'vitest'
import { importsOf, readSource, sourceFiles, type SourceImport } from '#tests/support/source-imports.ts'

/*
 * Which folder may import which. The shared folders stand bottom up: each may import those before it. To move a border,
 * change the table and say why in docs/decisions.
 */

const sharedOrder = [
  'shared/numerics',
  'shared/units',
  'shared/errors.ts',
  'shared/parts',
  'shared/network',
  'shared/analysis',
  'shared/sensors',
  'shared/amplifiers',
  'shared/filters',
  'shared/converters',
  'shared/budget',
  'shared/design',
  'shared/studies',
  'shared/drawings',
  'shared/schematic',
  'shared/note',
  'shared/bench',
  'shared/api',
]

/** The words that designs and plans are written in: types of them are everybody's, code is not. */
const vocabulary = [
  'shared/design/plan.ts',
  'shared/design/schema.ts',
  'shared/analysis/extremes.ts',
  'shared/budget/error-input.ts',
]

/** Imports against the order that are still there. This list may only shrink. */
const borders = [
  // A chain is assembled from stages, and budgets are taken of a chain: both sides know it.
  'shared/budget → shared/design/chain.ts',
  'shared/budget → shared/design/references.ts',
  'shared/amplifiers → shared/design/references.ts',
]

const server: Record<string, string[]> = {
  'server/features': ['entities', 'gateways', 'documents', 'middleware', 'lib', 'features', 'config.ts'],
  'server/entities': [],
  'server/migrations': ['config.ts', 'data-source.ts', 'entities', 'lib'],
  'server/gateways': ['lib'],
  'server/documents': [],
  'server/middleware': ['entities', 'middleware', 'lib', 'config.ts'],
  'server/lib': ['entities', 'lib', 'middleware', 'workers', 'config.ts', 'data-source.ts'],
  'server/workers': ['documents', 'lib', 'workers'],
  'server/demo': ['entities', 'features', 'lib'],
}

const client: Record<string, string[]> = {
  'client/routes': ['features', 'components', 'hooks', 'lib'],
  'client/components': ['hooks', 'lib'],
  'client/hooks': ['components', 'lib'],
  'client/lib': [],
}

const folders = ['shared', 'server', 'client']
const all: SourceImport[] = folders.flatMap(sourceFiles).flatMap(importsOf)
const inside = (path: string, folder: string) => path === folder || path.startsWith(`${folder}/`)
const said = (found: SourceImport[]) => found.map(({ file, target }) => `${file} imports ${target}`)

it('reads the sources that it judges', () => {
  expect(all.length).toBeGreaterThan(500)
  expect(all.some((i) => i.typeOnly)).toBe(true)
  expect(all.some((i) => i.isPackage && i.target === 'react')).toBe(true)
})

it('knows every folder of the shared code', () => {
  const known = (file: string) => sharedOrder.some((folder) => inside(file, folder))
  expect(sourceFiles('shared').filter((file) => !known(file))).toEqual([])
})

describe('client and server', () => {
  it('never import each other', () => {
    const across = all.filter(
      ({ file, target, isPackage }) =>
        !isPackage &&
        ((inside(file, 'client') && inside(target, 'server')) ||
          (inside(file, 'server') && inside(target, 'client'))),
    )
    expect(said(across)).toEqual([])
  })

  it('are imported by nothing shared', () => {
    const out = all.filter(
      ({ file, target, isPackage }) => inside(file, 'shared') && !isPackage && !inside(target, 'shared'),
    )
    expect(said(out)).toEqual([])
  })
})

describe('shared code', () => {
  it.each(sharedOrder)('in %s runs on what stands before it alone', (folder) => {
    const allowed = sharedOrder.slice(0, sharedOrder.indexOf(folder) + 1)
    const upward = all.filter(({ file, target, isPackage, typeOnly }) => {
      if (isPackage || !inside(file, folder) || allowed.some((below) => inside(target, below))) return false
      if (typeOnly && vocabulary.includes(target)) return false
      return !borders.includes(`${folder} → ${target}`)
    })
    expect(said(upward)).toEqual([])
  })

  it.each(borders)('still has the border %s on the list of those to remove', (border) => {
    const [folder = '', target = ''] = border.split(' → ')
    expect(all.some((i) => inside(i.file, folder) && i.target === target)).toBe(true)
  })

  it('uses packages that run everywhere', () => {
    const everywhere = ['zod', 'mathjs', 'canonicalize', '@noble/hashes', 'd3-scale', 'd3-shape']
    const found = all.filter((i) => inside(i.file, 'shared') && i.isPackage && !everywhere.includes(i.target))
    expect(said(found)).toEqual([])
  })

  it('touches neither page nor process, neither clock nor chance', () => {
    const foreign =
      /(?<![.\w'`"])(window\.|localStorage|sessionStorage|navigator\.|document\.(body|getElement|querySelector|createElement)|process\.|Buffer\.|require\(|globalThis|__dirname|Math\.random|Date\.now|new Date\(|performance\.|console\.|fetch\()/
    const found = sourceFiles('shared').flatMap((file) =>
      readSource(file)
        .split('\n')
        .flatMap((line, at) => {
          const code = line.replace(/^\s*(\*|\/\/|\/\*).*$/, '')
          const match = foreign.exec(code)
          return match ? [`${file}:${at + 1} uses ${match[1]}`] : []
        }),
    )
    expect(found).toEqual([])
  })
})

describe.each([
  ['server', server],
  ['client', client],
])('the %s', (side, table) => {
  it.each(Object.entries(table))('%s imports only its neighbours and shared code', (folder, neighbours) => {
    const allowed = [folder, 'shared', ...neighbours.map((name) => `${side}/${name}`)]
    const found = all.filter(
      ({ file, target, isPackage }) =>
        inside(file, folder) && !isPackage && !allowed.some((place) => inside(target, place)),
    )
    expect(said(found)).toEqual([])
  })
})

it('no area of the pages imports another', () => {
  const area = (path: string) => /^client\/features\/([^/]+)\//.exec(path)?.[1]
  const found = all.filter(({ file, target }) => {
    const [from, to] = [area(file), area(target)]
    return from !== undefined && to !== undefined && from !== to
  })
  expect(said(found)).toEqual([])
})

describe('packages with one place', () => {
  it.each([
    ['@react-pdf/renderer', ['server/documents']],
    ['typeorm', ['server']],
    ['eecircuit-engine', ['server/lib', 'client/lib']],
    ['express', ['server']],
    ['react-router-dom', ['client']],
    ['mathjs', ['shared/units']],
    ['canonicalize', ['shared/design']],
    ['@noble/hashes', ['shared/design']],
  ])('%s stays in %s', (name, places) => {
    const found = all.filter((i) => i.isPackage && i.target === name)
    expect(found.length).toBeGreaterThan(0)
    expect(said(found.filter((i) => !places.some((place) => inside(i.file, place))))).toEqual([])
  })
})
