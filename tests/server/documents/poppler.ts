import { execFileSync } from 'node:child_process'
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'

/** Runs one of the poppler programs over a PDF and gives what it prints; `-` stands for the file. */
export function readPdf(pdf: Buffer, program: string, ...options: string[]): string {
  const folder = mkdtempSync(join(tmpdir(), 'note-'))
  try {
    const file = join(folder, 'note.pdf')
    writeFileSync(file, pdf)
    const output = program === 'pdftotext' ? ['-'] : []
    return execFileSync(program, [...options, file, ...output], { encoding: 'utf8', maxBuffer: 1 << 26 })
  } finally {
    rmSync(folder, { recursive: true })
  }
}

/** Text of each sheet in the order in which it was set, so that a cell stays in one piece. */
export const readSheets = (pdf: Buffer): string[] =>
  readPdf(pdf, 'pdftotext', '-raw', '-enc', 'UTF-8').split('\f').slice(0, -1)

/** Without any white space, since a cell may wrap anywhere between words. */
export const squeeze = (text: string): string => text.replace(/[\s\u00a0]+/g, '')
