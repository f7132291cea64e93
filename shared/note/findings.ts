import type { Finding } from '#shared/design/plan.ts'
import { sentence } from './figures.ts'
import type { Statement } from './types.ts'

/** Over and tight findings and cautions, worst first, each said once. */
export function toFindings(findings: readonly Finding[]): Statement[] {
  const order = ['over', 'tight', 'caution'] as const
  const seen = new Set<string>()
  return order.flatMap((severity) =>
    findings
      .filter((finding) => finding.severity === severity && !seen.has(finding.text) && seen.add(finding.text))
      .map((finding) => ({
        state: severity === 'caution' ? ('unknown' as const) : severity,
        text: sentence(finding.text),
      })),
  )
}
