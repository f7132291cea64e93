import { existsSync } from 'node:fs'
import { dirname, join } from 'node:path'

/** The project's folder, whether this runs from the sources or from `dist/server`. */
export function findRoot(start = import.meta.dirname): string {
  let folder = start
  while (!existsSync(join(folder, 'package.json'))) {
    const parent = dirname(folder)
    if (parent === folder) throw new Error(`No package.json above ${start}`)
    folder = parent
  }
  return folder
}
