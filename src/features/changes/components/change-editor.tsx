import { useQuery } from '@tanstack/react-query'
import { useCallback, useEffect, useMemo, useState, useSyncExternalStore } from 'react'
import type { ReactNode } from 'react'
import { useSearchParams } from 'react-router'
import type { ChangeView } from '../../../../shared/contract/changes.ts'
import type { AskStretches, CheckView, Finding } from '../../../../shared/contract/checks.ts'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import { fieldError } from '../../../lib/api-client.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { alteredIn } from '../altered.ts'
import type { DraftState } from '../draft-keeper.ts'
import { useBringUpToDate, useCancelChange, useDescribeChange, useGoBackTo, useInviteWriter, useSubmitChange, type Current } from '../mutations.ts'
import { draftPointsQuery, firmwareNames, schemasQuery, upToDateQuery } from '../queries.ts'
import { rulerQuestions } from '../ruler-questions.ts'
import { jointsInScope, scopeOf } from '../scope.ts'
import { submitNeeds, unfitJoints, unrequested } from '../submit-needs.ts'
import { TriedEdits, TriesContext } from '../tried-edits.ts'
import { UnstableContext, type UnstableStretches } from '../unstable-context.ts'
import { useDraft } from '../use-draft.ts'
import { useUndoKeys } from '../use-undo-keys.ts'
import { BeforeSubmit } from './before-submit.tsx'
import { ChangeHead } from './change-head.tsx'
import { ConcessionDialog } from './concession-dialog.tsx'
import { ConflictsPanel } from './conflicts-panel.tsx'
import { DraftPointsDialog } from './draft-points-dialog.tsx'
import { ReasonDialog } from './reason-dialog.tsx'
import { ReasonField } from './reason-field.tsx'
import { SaveLine } from './save-line.tsx'
import { TitleField } from './title-field.tsx'
import { UpToDatePanel } from './up-to-date-panel.tsx'
import { noSchemas } from '../value-cells.ts'
import { ValueViews } from './value-views.tsx'
import { WritersDialog } from './writers-dialog.tsx'

export interface Looked {
  state: DraftState
  /** edits in fields that are still typed in */
  tried: readonly Edit[]
  /** joints in the scope */
  joints: string[]
  /** rulers of a joint on which unstable stretches are asked for */
  rulersOf: (joint: string) => AskStretches['rulers']
  /** puts edits into the draft, as if they were typed */
  onEdit: (edits: readonly Edit[]) => void
}

export interface Checked {
  /** the check as known */
  check: CheckView | undefined
  /** it is of older values */
  stale: boolean
  /** unstable stretches of the rulers */
  unstable: UnstableStretches
  panel: ReactNode
  proposes: ReactNode
}

export interface ChangeEditorProps {
  change: ChangeView
  personId: number
  people: readonly { id: number; name: string }[]
  firmware: readonly string[]
  /** asked for with the state of the draft */
  useCheck: (looked: Looked) => Checked
  onSubmitted: () => void
}

const noFindings: readonly Finding[] = []

type Open = 'concession' | 'points' | 'writers' | 'cancel' | null

/** A draft under its writer's hands: values in three views, the live check beside, reason, what is needed to submit. */
export function ChangeEditor({ change, personId, people, firmware, useCheck, onSubmitted }: ChangeEditorProps) {
  const { keeper, state } = useDraft(change, personId)
  const { view, set } = state
  const [search] = useSearchParams()
  const [open, setOpen] = useState<Open>(null)
  const close = () => setOpen(null)
  useUndoKeys(keeper)

  const altered = useMemo(() => alteredIn(set, view.base), [set, view.base])
  // Chosen once: the page does not move to another family because a value fell back into its notch.
  const [first] = useState(altered.most)
  const scope = useMemo(() => scopeOf(search, set, first), [search, set, first])
  const names = useMemo(() => firmwareNames(view.set, view.base), [view.set, view.base])
  const schemas = useQuery(schemasQuery(view.key, names)).data ?? noSchemas
  // The same function every time: the cells of the table are drawn again only when their own value alters.
  const edit = useCallback((edits: readonly Edit[]) => keeper.edit(edits), [keeper])
  const [tries] = useState(() => new TriedEdits())
  const tried = useSyncExternalStore(tries.subscribe, tries.get)
  const { check, stale, unstable, panel, proposes } = useCheck({
    state,
    tried,
    joints: jointsInScope(scope, set),
    rulersOf: (joint) => rulerQuestions(set, view.base, joint, schemas),
    onEdit: edit,
  })
  useEffect(() => {
    // What was typed is in step with the other views as soon as one goes there.
    if (scope.view !== 'text') void keeper.flush()
  }, [keeper, scope.view])

  const findings = check?.findings ?? noFindings
  // The views are drawn again when something of the draft alters, not at every key and every answer of the check.
  const views = useMemo(
    () => (
      <ValueViews
        changeKey={view.key}
        state={state}
        base={view.base}
        schemas={schemas}
        scope={scope}
        altered={altered}
        findings={findings}
        firmware={firmware}
        onEdit={edit}
        onType={(text) => keeper.type(text)}
        onDropText={() => keeper.dropText()}
      />
    ),
    [view.key, state, view.base, schemas, scope, altered, findings, firmware, edit, keeper],
  )

  const current: Current = async () => {
    await keeper.flush()
    return keeper.getState().view
  }
  const describe = useDescribeChange(current)
  const concede = useDescribeChange(current)
  const submit = useSubmitChange(current)
  const cancel = useCancelChange(current)
  const back = useGoBackTo(current)
  const invite = useInviteWriter(view.key)
  const bring = useBringUpToDate(current)
  const outdated = view.may.bringUpToDate.allowed
  const newer = useQuery({ ...upToDateQuery(view.key, view.revision), enabled: outdated })
  const points = useQuery({ ...draftPointsQuery(view.key, view.revision), enabled: open === 'points' || state.conflicts.length > 0 })
  const sets = [set, view.base]
  const unfit = useMemo(() => unfitJoints(set, schemas), [set, schemas])
  const needs = submitNeeds({ change: view, set, saving: state.saving, check, stale, unfit })
  const others = view.writers.filter((w) => people.find((p) => p.id === personId)?.name !== w)

  return (
    <>
      <ChangeHead change={view} proposes={proposes} title={<TitleField title={view.title} onSave={(title) => describe.mutate({ title })} error={fieldError(describe.error, '/title')} />} />
      {outdated && <UpToDatePanel query={newer} baseVersion={view.baseVersion} sets={sets} schemas={schemas} signed={false} onBring={(d) => bring.mutate(d)} pending={bring.isPending} problem={bring.error} />}
      <div className="mt-3 grid grid-cols-[minmax(0,1fr)] gap-x-4 gap-y-8 xl:grid-cols-[minmax(0,1fr)_392px]">
        <div className="min-w-0">
          {state.conflicts.length > 0 && <div className="sticky top-2 z-20 mb-3"><ConflictsPanel conflicts={state.conflicts} sets={sets} schemas={schemas} onDecide={(c, keep) => keeper.decide(c, keep)} whoAt={(p) => points.data?.find((d) => d.edits.some((e) => e.pointer === p || p.startsWith(`${e.pointer}/`)))?.by ?? null} /></div>}
          {state.refusal && (
            <div className="mb-3">
              <ProblemPanel problem={state.refusal} onRetry={() => keeper.retry()}>
                What you typed is kept in this browser.
              </ProblemPanel>
              <Button small className="ml-[14px]" onClick={() => keeper.dropRefused()}>
                Take it back
              </Button>
            </div>
          )}
          <TriesContext value={tries}>
          <UnstableContext value={unstable}>
          {views}
          </UnstableContext>
          </TriesContext>
          <div className="mt-6 grid gap-6 md:grid-cols-[minmax(0,1fr)_344px]">
            <ReasonField reason={view.reason} onSave={(reason) => describe.mutateAsync({ reason })} saving={describe.isPending} error={fieldError(describe.error, '/reason') ?? (describe.error ? describe.error.message : null)} />
            <BeforeSubmit
              needs={needs}
              refusal={view.may.submit.allowed ? null : view.may.submit.why}
              open={check ? unrequested(check.findings, view) : []}
              requested={view.concessions.length}
              onRequest={() => setOpen('concession')}
              onSubmit={() => submit.mutate(undefined, { onSuccess: onSubmitted })}
              onCancel={view.may.cancel.allowed ? () => setOpen('cancel') : null}
              pending={submit.isPending}
              problem={submit.error}
            />
          </div>
          <SaveLine
            state={state}
            onUndo={() => keeper.undo()}
            onRedo={() => keeper.redo()}
            onRetry={() => keeper.retry()}
            onPoints={() => setOpen('points')}
            writers={
              <>
                {others.length > 0 && <span>with {others.join(', ')}</span>}
                {view.may.inviteWriter.allowed && (
                  <button type="button" className="link" onClick={() => setOpen('writers')}>
                    invite a writer
                  </button>
                )}
              </>
            }
          />
        </div>
        <aside className="min-w-0">{panel}</aside>
      </div>
      {open === 'concession' && check && (
        <ConcessionDialog
          key={view.concessions.length}
          open={unrequested(check.findings, view)}
          requested={view.concessions}
          rules={view.concessionRules}
          today={new Date().toISOString().slice(0, 10)}
          onSave={(concessions) => concede.mutate({ concessions })}
          onClose={close}
          pending={concede.isPending}
          problem={concede.error}
        />
      )}
      {open === 'points' && <DraftPointsDialog query={points} sets={sets} schemas={schemas} onGoBack={(p) => back.mutate(p, { onSuccess: close })} onClose={close} pending={back.isPending} problem={back.error} />}
      {open === 'writers' && <WritersDialog writers={view.writers} people={people} onInvite={(p) => invite.mutate(p, { onSuccess: close })} onClose={close} pending={invite.isPending} problem={invite.error} />}
      {open === 'cancel' && (
        <ReasonDialog title={`Cancel “${view.title}”`} act="Cancel the change" keep="Keep it" onConfirm={(reason) => cancel.mutate({ reason }, { onSuccess: close })} onClose={close} pending={cancel.isPending} problem={cancel.error}>
          <p className="text-13 text-ink-2">It ends here: its content stays readable, and it can't be taken up again.</p>
        </ReasonDialog>
      )}
    </>
  )
}
