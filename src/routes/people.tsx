import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { useNavigate } from 'react-router'
import { paths } from '../app/paths.ts'
import { FilterField } from '../components/layout/filter-field.tsx'
import { PageHead } from '../components/layout/page-head.tsx'
import { fits, useUrlText } from '../components/layout/use-url-state.ts'
import { Button } from '../components/ui/button.tsx'
import { InviteDialog } from '../features/people/components/invite-dialog.tsx'
import { PeopleTable, roleWords } from '../features/people/components/people-table.tsx'
import { peopleQuery } from '../features/people/queries.ts'
import { machinesQuery } from '../features/machines/queries.ts'
import { count } from '../lib/format.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => queryClient.ensureQueryData(peopleQuery)

export function Component() {
  const { people, may } = useSuspenseQuery(peopleQuery).data
  const machines = useQuery(machinesQuery).data ?? []
  const navigate = useNavigate()
  const [inviting, setInviting] = useState(false)
  const [filter, setFilter] = useUrlText('filter')
  const machineName = (key: string) => machines.find((m) => m.key === key)?.name ?? key
  return (
    <>
      <PageHead
        title="People"
        actions={
          <>
            <FilterField label="filter people" value={filter} onChange={setFilter} />
            {may.invite.allowed && (
              <Button kind="primary" onClick={() => setInviting(true)}>
                Invite a person…
              </Button>
            )}
          </>
        }
      >
        {count(people.length, 'person', 'people')} and the roles they hold
      </PageHead>
      <PeopleTable people={people.filter((p) => fits(filter, p.name, p.email, p.state, roleWords(p, machineName)))} machineName={machineName} />
      {inviting && <InviteDialog machines={machines.filter((m) => !m.retired)} onClose={() => setInviting(false)} onInvited={(person) => void navigate(paths.person(person.id))} />}
    </>
  )
}
