import { useState } from 'react'
import { useMutation, useQuery, useQueryClient, useSuspenseQuery } from '@tanstack/react-query'
import { useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import type { ChangeView } from '../../shared/contract/changes.ts'
import type { CheckView, JointCheck } from '../../shared/contract/checks.ts'
import type { Edit } from '../../shared/parameters/edits.ts'
import { valueAt } from '../../shared/parameters/paths.ts'
import { Region } from '../components/layout/region.tsx'
import { useUrlText } from '../components/layout/use-url-state.ts'
import { ProblemPanel } from '../components/problem/problem-panel.tsx'
import { Button } from '../components/ui/button.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { KeyValueList } from '../components/ui/key-value-list.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { Select } from '../components/ui/select.tsx'
import { Time } from '../components/ui/time.tsx'
import { useToast } from '../components/ui/toast-context.ts'
import { Hash } from '../components/ui/hash.tsx'
import { VerdictMark } from '../components/ui/verdict-mark.tsx'
import { ChangeHead } from '../features/changes/components/change-head.tsx'
import { saveValues } from '../features/changes/mutations.ts'
import { acceptChange, changeQuery } from '../features/changes/queries.ts'
import { FindingList } from '../features/checks/components/finding-list.tsx'
import { GainMap, type Tried } from '../features/checks/components/gain-map.tsx'
import { JointReport } from '../features/checks/components/joint-report.tsx'
import { JointVerdicts } from '../features/checks/components/joint-verdicts.tsx'
import { RetuneDialog } from '../features/checks/components/retune-dialog.tsx'
import { StartingValuesDialog } from '../features/checks/components/starting-values-dialog.tsx'
import { ToleranceWalk } from '../features/checks/components/tolerance-walk.tsx'
import { countsText, worstOf } from '../features/checks/figures.ts'
import { checkQuery, jointReportQuery } from '../features/checks/queries.ts'
import { queryClient } from '../lib/query-client.ts'

export async function loader({ params }: LoaderFunctionArgs) {
  const change = await queryClient.ensureQueryData(changeQuery(params.change!))
  void queryClient.prefetchQuery(checkQuery(change.key, change.revision))
  return null
}

export function Component() {
  const { change: key } = useParams()
  const change = useSuspenseQuery(changeQuery(key!)).data
  const query = useQuery(checkQuery(change.key, change.revision))
  return (
    <>
      <ChangeHead
        change={change}
        actions={
          <Button className="no-print ml-auto" onClick={() => window.print()}>
            Print
          </Button>
        }
      />
      <div className="mt-4">
        {query.data && <Summary check={query.data} />}
        {query.data && <ToleranceWalk change={change.key} check={query.data} className="mb-4 max-w-[640px]" />}
        <Region query={query} what="the check" lines={8} isEmpty={(c) => c.joints.length === 0} empty={<EmptyState title="No joint to check yet">The check begins with the first joint of the change.</EmptyState>}>
          {(check) => <Report check={check} change={change} stale={query.isPlaceholderData} />}
        </Region>
      </div>
    </>
  )
}

function Summary({ check }: { check: CheckView }) {
  return (
    <div className="mb-6 flex flex-wrap items-start gap-x-10 gap-y-2">
      {check.verdict ? <VerdictMark verdict={check.verdict} size={34} className="text-28 font-medium max-sm:text-20" /> : <span className="text-20 text-ink-2">no verdict</span>}
      <KeyValueList
        entries={[
          { key: 'run', value: <Time at={check.checkedAt} style="long" /> },
          { key: 'model, policy', value: <span className="num">{`${check.modelVersion}, ${check.policyNumber}`}</span> },
          { key: 'inputs', value: <Hash hash={check.inputsHash} bytes={6} /> },
          { key: 'findings', value: countsText(check) },
        ]}
      />
    </div>
  )
}

/** Puts edits into the draft as the editor does: each says what stood there, so that nobody is overwritten unseen. */
function useEdit(change: ChangeView) {
  const client = useQueryClient()
  const toast = useToast()
  return useMutation({
    mutationFn: (edits: readonly Edit[]) => saveValues(change.key, edits),
    onSuccess: async (view, edits) => {
      await acceptChange(client, view)
      const back = edits.map(({ pointer, from, to }) => ({ pointer, from: to, ...(from === undefined ? {} : { to: from }) }))
      toast({ text: `${edits.length === 1 ? 'One value is' : `${edits.length} values are`} in the draft; the check runs again.`, action: { label: 'take back', onSelect: () => void saveValues(change.key, back).then((v) => acceptChange(client, v), () => toast({ text: 'The values were altered since and were left as they are.' })) } })
    },
  })
}

function Report({ check, change, stale }: { check: CheckView; change: ChangeView; stale: boolean }) {
  const [chosen, setChosen] = useUrlText('joint')
  const joint = check.joints.find((j) => j.joint === chosen) ?? worstOf(check.joints)
  const nameOf = (key: string) => change.set.joints[key]?.name ?? change.base.joints[key]?.name ?? key
  const familyOf = (key: string) => change.set.families[change.set.joints[key]?.family]?.name ?? ''
  return (
    <div aria-busy={stale}>
      {stale && <p className="mb-3 text-13 text-plum">Stale: the change was saved since; its check is running.</p>}
      {joint && <OneJoint key={joint.joint} joint={joint} check={check} change={change} nameOf={nameOf} familyOf={familyOf} onChoose={setChosen} />}
      <section className="mt-8">
        <SectionHeading aux={countsText(check)}>Findings of the whole change</SectionHeading>
        <div className="mt-1">
          <FindingList findings={check.findings} nameOf={nameOf} note={(f) => <Requested change={change} finding={f.key} />} />
        </div>
      </section>
      <section className="mt-8">
        <SectionHeading aux="decoded registers, nominal values">Every joint</SectionHeading>
        <div className="mt-1">
          <JointVerdicts joints={check.joints} nameOf={nameOf} familyOf={familyOf} chosen={joint?.joint ?? null} onChoose={setChosen} />
        </div>
      </section>
    </div>
  )
}

function Requested({ change, finding }: { change: ChangeView; finding: string }) {
  const at = change.concessions.findIndex((c) => c.finding === finding)
  return at < 0 ? null : <p className="text-plum">concession {at + 1}</p>
}

interface OneJointProps {
  joint: JointCheck
  check: CheckView
  change: ChangeView
  nameOf: (joint: string) => string
  familyOf: (joint: string) => string
  onChoose: (joint: string) => void
}

function OneJoint({ joint, check, change, nameOf, familyOf, onChoose }: OneJointProps) {
  const query = useQuery(jointReportQuery(change.key, change.revision, joint.joint))
  const [open, setOpen] = useState<'starting values' | 'retune' | null>(null)
  const edit = useEdit(change)
  const may = change.may.edit
  const put = (edits: readonly Edit[]) => edit.mutate(edits, { onSuccess: () => setOpen(null) })
  const tryCell = (tried: Tried[]) => {
    const edits = tried.map(({ pointer, to }): Edit => {
      const from = valueAt(change.set, pointer)
      return { pointer, ...(from === undefined ? {} : { from }), to }
    })
    if (edits.length > 0 && !edit.isPending) edit.mutate(edits)
  }
  const choices = [...check.joints].sort((a, b) => Number(b.touched) - Number(a.touched)).map((j) => ({ value: j.joint, label: `${nameOf(j.joint)}${j.touched ? ', touched' : ''}` }))
  const dialog = { change: change.key, revision: change.revision, joint, nameOf, pending: edit.isPending, problem: edit.error, onApply: put, onClose: () => setOpen(null) }
  return (
    <section aria-label={`report of ${nameOf(joint.joint)}`}>
      <SectionHeading aux={familyOf(joint.joint)} className="mb-3">
        {nameOf(joint.joint)}
      </SectionHeading>
      <div className="no-print mb-4 flex flex-wrap items-end gap-3">
        <Select label="Joint" value={joint.joint} options={choices} onChange={onChoose} />
        {joint.candidate && (
          <>
            <Button unavailable={may.allowed ? null : may.why} onClick={() => setOpen('starting values')}>
              Starting values
            </Button>
            <Button unavailable={may.allowed ? null : may.why} onClick={() => setOpen('retune')}>
              Robust retune
            </Button>
          </>
        )}
      </div>
      {open === null && <ProblemPanel className="mb-3" problem={edit.error} />}
      <Region query={query} what={`the report of ${nameOf(joint.joint)}`} lines={12}>
        {(report) => (
          <JointReport
            report={report}
            nameOf={nameOf}
            base={change.baseVersion}
            map={report.candidate && <GainMap change={change.key} revision={change.revision} report={report} base={change.baseVersion} onTry={may.allowed ? tryCell : undefined} whyNot={may.allowed ? '' : may.why} />}
            findings={
              <section>
                <SectionHeading aux={String(report.findings.length)}>Findings</SectionHeading>
                <FindingList findings={report.findings} nameOf={nameOf} narrow sources note={(f) => <Requested change={change} finding={f.key} />} />
              </section>
            }
          />
        )}
      </Region>
      {open === 'starting values' && <StartingValuesDialog {...dialog} />}
      {open === 'retune' && <RetuneDialog {...dialog} />}
    </section>
  )
}
