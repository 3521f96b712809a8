import type { ReactNode } from 'react'
import { paths } from '../../../app/paths.ts'
import type { ChangeView } from '../../../../shared/contract/changes.ts'
import { Rail } from '../../../components/ui/rail.tsx'
import { ViewSwitch } from '../../../components/ui/view-switch.tsx'
import { railOf } from '../rail-of.ts'

export interface ChangeHeadProps {
  change: ChangeView
  /** in place of the plain title, as a field that edits it */
  title?: ReactNode
  /** after the base release: what it proposes */
  proposes?: ReactNode
  /** at the end of the line of views */
  actions?: ReactNode
}

/** The head of every page of a change: what it is, its life as a rail, and the ways to look at it. */
export function ChangeHead({ change, title, proposes, actions }: ChangeHeadProps) {
  return (
    <header className="border-b border-hairline pt-3 pb-3">
      <title>{`${change.machineName} ${change.number}, ${change.title} · Detent`}</title>
      <div className="flex flex-wrap items-start gap-x-6 gap-y-2">
        <div className="min-w-0 flex-1 basis-72">
          <p className="text-13 text-ink-2">
            change {change.number}, {change.machineName}, {change.baseVersion ? <>from release <span className="num">{change.baseVersion}</span></> : 'before the first release'}
            {proposes}
          </p>
          {title ?? <h1 className="max-sm:text-20">{change.title}</h1>}
        </div>
        <div className="w-full md:w-[min(620px,50%)]">
          <Rail {...railOf(change)} />
        </div>
      </div>
      <div className="mt-2 flex flex-wrap items-center gap-x-6 gap-y-2">
        <ViewSwitch
          label="pages of the change"
          views={[
            { label: 'values', to: paths.change(change.key) },
            { label: 'check', to: paths.changeCheck(change.key) },
            { label: 'review', to: paths.changeReview(change.key) },
          ]}
        />
        {actions}
      </div>
    </header>
  )
}
