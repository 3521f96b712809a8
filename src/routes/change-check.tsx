import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import type { ChangeView } from '../../shared/contract/changes.ts'
import type { CheckView } from '../../shared/contract/checks.ts'
import { Region } from '../components/layout/region.tsx'
import { useUrlText } from '../components/layout/use-url-state.ts'
import { Button } from '../components/ui/button.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { KeyValueList } from '../components/ui/key-value-list.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { Time } from '../components/ui/time.tsx'
import { Hash } from '../components/ui/hash.tsx'
import { VerdictMark } from '../components/ui/verdict-mark.tsx'
import { ChangeHead } from '../features/changes/components/change-head.tsx'
import { changeQuery } from '../features/changes/queries.ts'
import { FindingList } from '../features/checks/components/finding-list.tsx'
import { JointReport } from '../features/checks/components/joint-report.tsx'
import { JointVerdicts } from '../features/checks/components/joint-verdicts.tsx'
import { ToleranceWalk } from '../features/checks/components/tolerance-walk.tsx'
import { countsText, worstOf } from '../features/checks/figures.ts'
import { checkQuery } from '../features/checks/queries.ts'
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

function Report({ check, change, stale }: { check: CheckView; change: ChangeView; stale: boolean }) {
  const [chosen, setChosen] = useUrlText('joint')
  const joint = check.joints.find((j) => j.joint === chosen) ?? worstOf(check.joints)
  const nameOf = (key: string) => change.set.joints[key]?.name ?? change.base.joints[key]?.name ?? key
  const familyOf = (key: string) => change.set.families[change.set.joints[key]?.family]?.name ?? ''
  return (
    <div aria-busy={stale}>
      {stale && <p className="mb-3 text-13 text-plum">Stale: the change was saved since; its check is running.</p>}
      {joint && (
        <section aria-label={`report of ${nameOf(joint.joint)}`}>
          <SectionHeading aux={familyOf(joint.joint)} className="mb-3">
            {nameOf(joint.joint)}
          </SectionHeading>
          <JointReport joint={joint} check={check} nameOf={nameOf} base={change.baseVersion} />
        </section>
      )}
      <section className="mt-8">
        <SectionHeading aux={countsText(check)}>Findings</SectionHeading>
        <div className="mt-1">
          <FindingList findings={check.findings} nameOf={nameOf} note={(f) => (change.concessions.some((c) => c.finding === f.key) ? <p className="text-plum">concession {change.concessions.findIndex((c) => c.finding === f.key) + 1}</p> : null)} />
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
