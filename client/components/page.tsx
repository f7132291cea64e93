import type { ReactNode } from 'react'

interface PageHeadProps {
  title: string
  /** One sentence or two under the title. */
  say?: ReactNode
  /** Controls at the right. */
  tools?: ReactNode
}

/** Head of a page under its title block. */
export function PageHead({ title, say, tools }: PageHeadProps) {
  return (
    <div className="mx-5 mt-3.5 mb-2 flex flex-wrap items-end gap-x-6 gap-y-2 max-sm:mx-3">
      <div className="min-w-0 flex-[1_1_24rem]">
        <h1>{title}</h1>
        {say !== undefined && <div className="max-w-[940px] text-14 text-ink-2">{say}</div>}
      </div>
      {tools !== undefined && <div className="no-print flex flex-wrap items-center gap-2.5">{tools}</div>}
    </div>
  )
}

/** A form or text on a sheet of reading width. */
export function FormSheet({ children }: { children: ReactNode }) {
  return <div className="sheet mx-5 mb-6 max-w-xl px-5 py-5 max-sm:mx-3 max-sm:px-3">{children}</div>
}
