import { useEffect } from 'react'

/** Title of the document, most particular part first: `usePageTitle('Channels', project.name)`. */
export function usePageTitle(...parts: (string | undefined)[]): void {
  const title = [...parts.filter((part) => part !== undefined && part !== ''), 'Spandrel'].join(', ')
  useEffect(() => {
    document.title = title
  }, [title])
}
