import type { ReactNode } from 'react'

export interface PageHeadProps {
  /** The page's one h1, and the browser's title. */
  title: string
  /** Other words for the browser's title. */
  documentTitle?: string
  /** Small words above: what kind of thing this is, or the way back to what holds it. */
  kicker?: ReactNode
  /** Quiet words below. */
  children?: ReactNode
  /** Figures and marks at the far end. */
  aside?: ReactNode
  actions?: ReactNode
}

/** The head of a page, closed by a hairline. */
export function PageHead({ title, documentTitle = title, kicker, children, aside, actions }: PageHeadProps) {
  return (
    <header className="mb-5 flex flex-wrap items-end gap-x-10 gap-y-3 border-b border-hairline pt-4 pb-4">
      <title>{`${documentTitle} · Detent`}</title>
      <div className="min-w-0">
        {kicker && <div className="text-13 text-ink-2">{kicker}</div>}
        <h1 className="max-sm:text-20">{title}</h1>
        {children && <div className="text-ink-2">{children}</div>}
      </div>
      {aside && <div className="min-w-0">{aside}</div>}
      {actions && <div className="ml-auto flex flex-wrap items-center gap-2 max-sm:ml-0">{actions}</div>}
    </header>
  )
}
