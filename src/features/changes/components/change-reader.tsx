import { useQuery } from '@tanstack/react-query'
import { useMemo, useState } from 'react'
import type { ReactNode } from 'react'
import { useSearchParams } from 'react-router'
import type { ChangeView } from '../../../../shared/contract/changes.ts'
import type { Finding } from '../../../../shared/contract/checks.ts'
import { Button } from '../../../components/ui/button.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { paths } from '../../../app/paths.ts'
import { alteredIn } from '../altered.ts'
import { useBringUpToDate, useCancelChange } from '../mutations.ts'
import { firmwareNames, schemasQuery, upToDateQuery } from '../queries.ts'
import { jointsInScope, scopeOf } from '../scope.ts'
import { noSchemas } from '../value-cells.ts'
import { ChangeHead } from './change-head.tsx'
import { ReasonDialog } from './reason-dialog.tsx'
import { UpToDatePanel } from './up-to-date-panel.tsx'
import { ValueViews } from './value-views.tsx'

export interface ChangeReaderProps {
  change: ChangeView
  findings: readonly Finding[]
  panel: (joints: string[]) => ReactNode
}

/** A change that the reader may not edit, or nobody may any more: the same views, read only, with the reason why. */
export function ChangeReader({ change, findings, panel }: ChangeReaderProps) {
  const [search] = useSearchParams()
  const [cancelling, setCancelling] = useState(false)
  const altered = useMemo(() => alteredIn(change.set, change.base), [change.set, change.base])
  const scope = scopeOf(search, change.set, altered.most)
  const schemas = useQuery(schemasQuery(change.key, firmwareNames(change.set, change.base))).data ?? noSchemas
  const current = () => change
  const cancel = useCancelChange(current)
  const bring = useBringUpToDate(current)
  const newer = useQuery({ ...upToDateQuery(change.key, change.revision), enabled: change.may.bringUpToDate.allowed })
  return (
    <>
      <ChangeHead change={change} />
      {change.may.bringUpToDate.allowed && <UpToDatePanel query={newer} baseVersion={change.baseVersion} sets={[change.set, change.base]} schemas={schemas} signed onBring={(d) => bring.mutate(d)} pending={bring.isPending} problem={bring.error} />}
      <div className="my-3 flex flex-wrap items-center gap-x-4 gap-y-2 border-l-[3px] border-rule px-[14px] py-1 text-13">
        <p>
          Read only: {change.may.edit.allowed ? '' : change.may.edit.why} {reading[change.state]} {(change.state === 'submitted' || change.state === 'approved') && <TextLink to={paths.changeReview(change.key)}>to the review</TextLink>}
        </p>
        {change.may.cancel.allowed && change.state !== 'draft' && (
          <Button small onClick={() => setCancelling(true)}>
            Cancel the change…
          </Button>
        )}
      </div>
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-4 gap-y-8 xl:grid-cols-[minmax(0,1fr)_392px]">
        <div className="min-w-0">
          <ValueViews
            changeKey={change.key}
            state={{ set: change.set, text: change.text, textProblems: [], saving: 'saved' }}
            base={change.base}
            schemas={schemas}
            scope={scope}
            altered={altered}
            findings={findings}
            firmware={[]}
            onEdit={null}
            onType={null}
            onDropText={() => {}}
          />
          <section className="mt-6">
            <h2 className="label">Reason</h2>
            <p className="max-w-[76ch] whitespace-pre-wrap">{change.reason || <span className="text-ink-2">None is written yet.</span>}</p>
          </section>
        </div>
        <aside className="min-w-0">{panel(jointsInScope(scope, change.set))}</aside>
      </div>
      {cancelling && (
        <ReasonDialog title={`Cancel “${change.title}”`} act="Cancel the change" keep="Keep it" onConfirm={(reason) => cancel.mutate({ reason }, { onSuccess: () => setCancelling(false) })} onClose={() => setCancelling(false)} pending={cancel.isPending} problem={cancel.error}>
          <p className="text-13 text-ink-2">It ends here: its content stays readable, and it can't be taken up again.</p>
        </ReasonDialog>
      )}
    </>
  )
}

const reading: Record<ChangeView['state'], string> = {
  draft: '',
  submitted: 'Submitting froze its content; returning it opens it again and voids what was signed.',
  approved: 'Its content is signed; returning it opens it again and voids what was signed.',
  released: 'It is released and stays as it is.',
  cancelled: 'It stays readable.',
}
