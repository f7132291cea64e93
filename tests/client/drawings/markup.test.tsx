import { renderToStaticMarkup } from 'react-dom/server'
import { describe, expect, it } from 'vitest'
import { LevelDiagram } from '#client/components/drawings/level-diagram.tsx'
import { MiniLevels } from '#client/components/drawings/mini-levels.tsx'
import { Schematic } from '#client/components/drawings/schematic.tsx'
import { TransferPlot } from '#client/components/drawings/transfer-plot.tsx'
import { describeConnections } from '#shared/schematic/connections.ts'
import { layoutSchematic } from '#shared/schematic/layout.ts'
import { gauge } from '#tests/shared/drawings/sample-levels.ts'
import { sampleNetworks } from '#tests/shared/schematic/sample-networks.ts'

const quantity = { name: 'Stilling-well level', unit: 'm', low: -0.1, high: 5.2 }
const plain = (markup: string) => markup.replaceAll(/<[^>]+>/g, '|').replaceAll('\u00a0', ' ')

describe('the level diagram on the page', () => {
  const markup = renderToStaticMarkup(<LevelDiagram levels={gauge} quantity={quantity} editing="S2" />)

  it('is a named figure with one tab stop for the drawing, which is hidden from readers', () => {
    expect(markup).toMatch(/<figure[^>]+aria-labelledby/)
    expect(markup.match(/role="application"/g)).toHaveLength(1)
    expect(markup).toMatch(/role="application" tabindex="0"/i)
    for (const svg of markup.match(/<svg[^>]*>/g) ?? []) expect(svg).toMatch(/aria-hidden="true"|role="img"/)
  })

  it('shows every figure of the table, in the wide form and in blocks', () => {
    for (const figure of [
      '0.228 to 4.235 V',
      '4.2 % over',
      '4.8 %',
      '−0.361 and 4.976 m',
      'nominal 3.4 % over',
    ])
      expect(plain(markup).split(`|${figure}|`).length - 1, figure).toBeGreaterThanOrEqual(2)
    expect(markup.match(/scope="col"/g)).toHaveLength(gauge.length)
    expect(markup.match(/scope="row"/g)).toHaveLength(5)
  })

  it('refers only to patterns of its own drawing', () => {
    const ids = new Set([...markup.matchAll(/<pattern id="([^"]+)"/g)].map((m) => m[1]))
    const used = [...markup.matchAll(/url\(#([^)]+)\)/g)].map((m) => m[1])
    expect(used.length).toBeGreaterThan(0)
    for (const id of used) expect(ids).toContain(id)
    expect(ids.size).toBe((markup.match(/<pattern /g) ?? []).length)
  })

  it('says that the levels are old while something cannot be read', () => {
    expect(plain(markup)).not.toContain('last good levels')
    expect(plain(renderToStaticMarkup(<LevelDiagram levels={gauge} quantity={quantity} stale />))).toContain(
      'last good levels',
    )
  })

  it('pins the first and the last bay of a long chain', () => {
    const long = Array.from({ length: 8 }, (_, i) => ({
      ...(gauge[1 + (i % 2)] as (typeof gauge)[number]),
      node: `N${i}`,
    }))
    const wide = renderToStaticMarkup(<LevelDiagram levels={long} quantity={quantity} />)
    expect(wide).toContain('d-pin-left')
    expect(wide).toContain('d-pin-right')
    expect(markup).not.toContain('d-pin-left')
  })
})

describe('the other drawings on the page', () => {
  it('give the small levels in words', () => {
    expect(plain(renderToStaticMarkup(<MiniLevels levels={gauge} />))).toContain(
      '4 nodes, over at Converter input, tight at After S2',
    )
  })

  it('make each part of the schematic a stop in signal order, with its value and connections', () => {
    const network = sampleNetworks().find((s) => s.name === 'non-inverting-down')?.network
    if (!network) throw new Error('no sample')
    const markup = renderToStaticMarkup(<Schematic network={network} onPart={() => undefined} />)
    const stops = [...markup.matchAll(/<g class="d-part"[^>]*aria-label="([^ ",]+)/g)].map((m) => m[1])
    expect(stops).toEqual(layoutSchematic(network).parts.map((p) => p.ref))
    expect(stops[0]).toBe('RSOURCE')
    expect(stops.at(-1)).toBe('converter')
    const words = Object.fromEntries(
      describeConnections(network).map((c) => [c.ref, c.text.replaceAll('\u00a0', ' ')]),
    )
    expect(words.Rf).toBe('from U1 output to U1 −')
    expect(words.R1).toBe('from the reference, 2.5 V to point A')
    expect(words.R2).toBe('from point A to ground')
    expect(words.C9).toBe('from the converter to ground')
    expect(plain(markup)).toContain('from U1 output to U1 −')
  })

  it('give the transfer as a sentence and a table of eleven rows', () => {
    const markup = renderToStaticMarkup(
      <TransferPlot
        input={{
          quantity,
          converter: { input: { low: 0, high: 4.096 }, bits: 16, coding: 'straight' },
          nominal: { low: 0.248, high: 3.863 },
          worst: { low: { low: 0.24, high: 0.256 }, high: { low: 3.85, high: 3.88 } },
          codesUsed: 57838,
          region: { low: 0, high: 4.096 },
          linear: { low: -0.46, high: 5.54 },
          worstLinear: { low: -0.45, high: 5.51 },
        }}
      />,
    )
    expect(markup.match(/<tr>/g)).toHaveLength(12)
    expect(plain(markup)).toContain('57 838 codes. Every board is linear from −0.45 m to 5.51 m.')
    expect(plain(markup)).toContain('Read at')
  })
})
