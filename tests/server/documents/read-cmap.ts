/**
 * Code points that a TrueType file maps to a glyph, read from its `cmap` table (formats 4 and 12 of the OpenType
 * specification): a second opinion on what the note's typeface holds.
 */
export function readCmap(file: Buffer): Set<number> {
  const tables = file.readUInt16BE(4)
  for (let i = 0; i < tables; i += 1) {
    const entry = 12 + i * 16
    if (file.toString('latin1', entry, entry + 4) === 'cmap')
      return readSubtables(file, file.readUInt32BE(entry + 8))
  }
  throw new Error('the font has no cmap table')
}

function readSubtables(file: Buffer, start: number): Set<number> {
  const found = new Set<number>()
  const count = file.readUInt16BE(start + 2)
  for (let i = 0; i < count; i += 1) {
    const at = start + file.readUInt32BE(start + 4 + i * 8 + 4)
    const format = file.readUInt16BE(at)
    if (format === 4) readFormat4(file, at, found)
    if (format === 12) readFormat12(file, at, found)
  }
  return found
}

function readFormat4(file: Buffer, at: number, found: Set<number>): void {
  const double = file.readUInt16BE(at + 6)
  const [ends, starts] = [at + 14, at + 16 + double]
  const [deltas, offsets] = [starts + double, starts + 2 * double]
  for (let i = 0; i < double; i += 2) {
    const [first, last] = [file.readUInt16BE(starts + i), file.readUInt16BE(ends + i)]
    const offset = file.readUInt16BE(offsets + i)
    for (let code = first; code <= last && code < 0xffff; code += 1) {
      const raw = offset === 0 ? code : file.readUInt16BE(offsets + i + offset + 2 * (code - first))
      const glyph = raw === 0 ? 0 : (raw + file.readUInt16BE(deltas + i)) & 0xffff
      if (glyph !== 0) found.add(code)
    }
  }
}

function readFormat12(file: Buffer, at: number, found: Set<number>): void {
  const groups = file.readUInt32BE(at + 12)
  for (let i = 0; i < groups; i += 1) {
    const group = at + 16 + i * 12
    for (let code = file.readUInt32BE(group); code <= file.readUInt32BE(group + 4); code += 1) found.add(code)
  }
}
