import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import { PageHead } from '../components/layout/page-head.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { ConfirmSigning } from '../features/people/components/confirm-signing.tsx'
import { StateOfPerson } from '../features/people/components/people-table.tsx'
import { PersonActs } from '../features/people/components/person-acts.tsx'
import { PersonRoles } from '../features/people/components/person-roles.tsx'
import { personQuery } from '../features/people/queries.ts'
import { machinesQuery } from '../features/machines/queries.ts'
import { holds, useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = ({ params }: LoaderFunctionArgs) => queryClient.ensureQueryData(personQuery(params.person!))

export function Component() {
  const person = useSuspenseQuery(personQuery(useParams().person!)).data
  const machines = useQuery(machinesQuery).data ?? []
  const me = useMe()
  const keeps = holds(me, 'keep people')
  return (
    <>
      <PageHead
        kicker={<TextLink to={paths.people()}>People</TextLink>}
        title={person.name}
        actions={<TextLink to={paths.ledger({ person: person.name })}>what {person.name} did</TextLink>}
      >
        {person.email && <>{person.email}, </>}
        <StateOfPerson person={person} />
      </PageHead>
      <ConfirmSigning person={person} />
      <div className="grid gap-x-14 gap-y-8 lg:grid-cols-2">
        <PersonRoles person={person} machines={machines} />
        {keeps && (
          <section aria-labelledby="access">
            <SectionHeading id="access" className="mb-3">Access</SectionHeading>
            <PersonActs person={person} />
          </section>
        )}
      </div>
    </>
  )
}
