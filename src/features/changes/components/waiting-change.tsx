import type { ReactNode } from 'react'
import type { ChangeSummary } from '../../../../shared/contract/changes.ts'
import { LinkButton } from '../../../components/ui/link-button.tsx'
import { SmallRail } from '../../../components/ui/small-rail.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { formatDuration } from '../../../lib/format.ts'

export interface WaitingChangeProps {
  change: ChangeSummary
  to: string
  /** the act that waits: "Read and sign" */
  act: string
  now: number
  /** beside it: what the check says */
  children?: ReactNode
}

/** One thing that waits for the reader, with what is needed to begin. */
export function WaitingChange({ change, to, act, now, children }: WaitingChangeProps) {
  const others = change.writers.filter((w) => w !== change.author)
  return (
    <li className="grid gap-x-8 gap-y-3 border-b border-hairline py-4 md:grid-cols-[minmax(0,1fr)_390px]">
      <div className="min-w-0">
        <h3 className="text-20 font-medium">
          <span className="num mr-2 text-16 font-normal text-ink-2">{change.number}</span>
          <TextLink to={to} className="!border-0 !text-ink">
            {change.title}
          </TextLink>
        </h3>
        <p className="text-13 text-ink-2">
          {change.machineName}, by {change.author}
          {others.length > 0 && ` with ${others.join(', ')}`}, waiting {formatDuration(Math.max(0, (now - Date.parse(change.alteredAt)) / 1000))}
        </p>
        <div className="mt-3 flex flex-wrap items-center gap-4">
          <SmallRail state={change.life} />
          <LinkButton small to={to} aria-label={`${act}: ${change.title}`}>
            {act}
          </LinkButton>
        </div>
      </div>
      {children}
    </li>
  )
}
