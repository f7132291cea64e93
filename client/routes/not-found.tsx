import { NotFound } from '#client/components/not-found.tsx'
import { usePageTitle } from '#client/hooks/use-page-title.ts'

export function NotFoundPage() {
  usePageTitle('Not found')
  return <NotFound />
}
