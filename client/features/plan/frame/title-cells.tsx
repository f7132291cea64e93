import { RevisionMark } from '#client/components/marks.tsx'
import type { TitleCell } from '#client/components/title-block.tsx'
import { formatQuantity, formatRange } from '#shared/units/format-quantity.ts'
import { numberAt, textAt, type DraftDocument } from '../draft/paths.ts'

/** Cells of the title block that the draft itself fills. */
export function draftCells(document: DraftDocument): TitleCell[] {
  const unit = textAt(document, 'sensor.quantity.unit')
  const low = numberAt(document, 'sensor.quantity.low')
  const high = numberAt(document, 'sensor.quantity.high')
  return [
    {
      id: 'span',
      label: 'Required span',
      value: low === null || high === null ? 'open' : formatRange(low, high, unit),
    },
    { id: 'target', label: 'Target', value: targetText(document, unit) },
    {
      id: 'revision',
      label: 'Revision',
      value: (
        <>
          <RevisionMark state="draft" /> Draft
        </>
      ),
    },
  ]
}

function targetText(document: DraftDocument, unit: string): string {
  const limit = numberAt(document, 'target.limit')
  if (limit === null) return 'none stated'
  const perSpan = (textAt(document, 'target.per') || 'span') === 'span'
  return perSpan
    ? `${formatQuantity(limit, '', { display: 'percent' })} of span`
    : formatQuantity(limit, unit)
}
