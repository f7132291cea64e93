import { Link } from 'react-router-dom'
import { KeyTables } from '#client/components/keys.tsx'
import { PageHead } from '#client/components/page.tsx'
import { usePageTitle } from '#client/hooks/use-page-title.ts'
import { paths } from '#client/lib/paths.ts'

export function HelpKeysPage() {
  usePageTitle('Keys', 'Help')
  return (
    <>
      <PageHead
        title="Keys"
        say={
          <>
            Single letters work only while a list or a drawing has focus, and can be turned off under{' '}
            <Link to={paths.preferences}>Units and keys</Link>.
          </>
        }
      />
      <div className="sheet mx-5 mb-6 max-w-5xl px-5 py-5 max-sm:mx-3 max-sm:px-3">
        <KeyTables level="h2" />
      </div>
    </>
  )
}
