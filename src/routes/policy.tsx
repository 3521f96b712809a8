import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useState } from 'react'
import type { LoaderFunctionArgs } from 'react-router'
import { PageHead } from '../components/layout/page-head.tsx'
import { refusal } from '../components/layout/refused.ts'
import { Region } from '../components/layout/region.tsx'
import { useUrlText } from '../components/layout/use-url-state.ts'
import { Button } from '../components/ui/button.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { Select } from '../components/ui/select.tsx'
import { Time } from '../components/ui/time.tsx'
import { PolicyHistory } from '../features/policy/components/policy-history.tsx'
import { PolicyTable } from '../features/policy/components/policy-table.tsx'
import { ProposedPolicy } from '../features/policy/components/proposed-policy.tsx'
import { ProposePolicyDialog } from '../features/policy/components/propose-policy-dialog.tsx'
import { policyQuery } from '../features/policy/queries.ts'
import { machinesQuery } from '../features/machines/queries.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = async ({ request }: LoaderFunctionArgs) => {
  const machines = await queryClient.ensureQueryData(machinesQuery)
  const machine = new URL(request.url).searchParams.get('machine') ?? machines[0]?.key
  if (machine) void queryClient.prefetchQuery(policyQuery(machine))
  return null
}

export function Component() {
  const machines = useSuspenseQuery(machinesQuery).data
  const [asked, setAsked] = useUrlText('machine')
  const machine = asked || machines[0]?.key || ''
  const policy = useQuery({ ...policyQuery(machine), enabled: machine !== '' })
  const [proposing, setProposing] = useState(false)
  return (
    <>
      <PageHead
        title="Policy"
        actions={
          policy.data && (
            <Button kind="primary" unavailable={refusal(policy.data.may.propose)} onClick={() => setProposing(true)}>
              Propose another…
            </Button>
          )
        }
      >
        the limits that checks judge by, how many peers review, what a concession may ask and who proposes what
      </PageHead>
      {machines.length === 0 ? (
        <EmptyState title="There is no machine yet.">A machine begins with a first policy when it is made.</EmptyState>
      ) : (
        <>
          <Select label="Machine" width={220} className="mb-6" value={machine} onChange={setAsked} options={machines.map((m) => ({ value: m.key, label: m.name }))} />
          <Region query={policy} what="the policy" lines={10}>
            {(view) => (
              <div className="max-w-[880px]">
                {view.versions.filter((v) => v.state === 'proposed').map((v) => (
                  <ProposedPolicy key={v.number} policy={v} inForce={view.inForce.content} />
                ))}
                <section aria-labelledby="in-force" className="mb-8">
                  <SectionHeading id="in-force" aux={view.inForce.signedAt ? <>{view.inForce.signedBy ? `signed by ${view.inForce.signedBy},` : 'since'} <Time at={view.inForce.signedAt} style="long" /></> : undefined}>
                    Policy {view.inForce.number}, in force
                  </SectionHeading>
                  <p className="my-2 max-w-[80ch] whitespace-pre-wrap">{view.inForce.reason}</p>
                  <PolicyTable label={`policy ${view.inForce.number}`} content={view.inForce.content} />
                </section>
                {view.versions.some((v) => v.state === 'superseded' || v.state === 'declined') && (
                  <section aria-labelledby="before">
                    <SectionHeading id="before">Before</SectionHeading>
                    <PolicyHistory versions={view.versions.filter((v) => v.state === 'superseded' || v.state === 'declined')} />
                  </section>
                )}
                {proposing && <ProposePolicyDialog policy={view} onClose={() => setProposing(false)} />}
              </div>
            )}
          </Region>
        </>
      )}
    </>
  )
}
