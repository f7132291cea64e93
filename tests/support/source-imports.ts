import { readdirSync, readFileSync } from 'node:fs'
import { dirname, join, normalize } from 'node:path'

/** One import of a source file. */
export interface SourceImport {
  /** Path of the file from the root of the project. */
  file: string
  /** Path of what it imports from there, or the package's name. */
  target: string
  isPackage: boolean
  /** Gone when it runs: types only. */
  typeOnly: boolean
}

const STATEMENT =
  /(?:^|\n)\s*(?:import|export)\s+(type\s+)?([^'"`;]*?)\s*from\s*'([^']+)'|(?:^|\n)\s*import\s+'([^']+)'|\bimport\(\s*'([^']+)'\s*\)/g

export const root = normalize(join(import.meta.dirname, '../..'))

/** TypeScript files below a folder, from the root of the project. */
export function sourceFiles(folder: string): string[] {
  return readdirSync(join(root, folder), { recursive: true, encoding: 'utf8' })
    .filter((name) => /\.tsx?$/.test(name))
    .map((name) => `${folder}/${name}`)
    .sort()
}

export const readSource = (file: string): string => readFileSync(join(root, file), 'utf8')

export function importsOf(file: string): SourceImport[] {
  return [...readSource(file).matchAll(STATEMENT)].map((match) => {
    const [, typeWord, names = '', from, sideEffect, dynamic] = match
    const given = from ?? sideEffect ?? dynamic ?? ''
    const isPackage = !/^[#.]/.test(given)
    const target = given.startsWith('#')
      ? given.slice(1)
      : isPackage
        ? packageName(given)
        : normalize(join(dirname(file), given))
    return { file, target, isPackage, typeOnly: Boolean(typeWord) || allTypes(names) }
  })
}

const packageName = (given: string): string =>
  given
    .split('/')
    .slice(0, given.startsWith('@') ? 2 : 1)
    .join('/')

/** `{ type A, type B }` */
function allTypes(names: string): boolean {
  const inner = /^\{([\s\S]*)\}$/.exec(names.trim())?.[1]
  const list = inner
    ?.split(',')
    .map((name) => name.trim())
    .filter(Boolean)
  return Boolean(list && list.length > 0 && list.every((name) => name.startsWith('type ')))
}
