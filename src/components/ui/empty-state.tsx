import type { ReactNode } from 'react'

export interface EmptyStateProps {
  title: string
  /** What to do next, or when something will stand here. */
  children?: ReactNode
  action?: ReactNode
  className?: string
}

/** A notch without a ball. */
export function EmptyState({ title, children, action, className = '' }: EmptyStateProps) {
  return (
    <div className={`sheet px-6 py-6 text-center ${className}`}>
      <svg width="200" height="40" viewBox="0 0 200 40" className="mx-auto max-w-full" aria-hidden="true">
        <path d="M0 12H88l12 16 12-16h88" fill="none" stroke="var(--rule)" strokeWidth="1.5" />
      </svg>
      <p className="mt-1 text-16">{title}</p>
      {children && <div className="mx-auto mt-1 max-w-[60ch] text-13 text-ink-2">{children}</div>}
      {action && <div className="mt-3 flex flex-wrap justify-center gap-2">{action}</div>}
    </div>
  )
}
