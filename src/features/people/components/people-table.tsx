import type { PersonView } from '../../../../shared/contract/people.ts'
import { paths } from '../../../app/paths.ts'
import { useUrlSort } from '../../../components/layout/use-url-state.ts'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'

/** "peer reviewer, builder on dunlin": roles in words. */
export const roleWords = (person: PersonView, machineName: (key: string) => string): string =>
  person.roles.map((r) => (r.machine === null ? r.role : `${r.role} on ${machineName(r.machine)}`)).join(', ')

export function PeopleTable({ people, machineName }: { people: readonly PersonView[]; machineName: (key: string) => string }) {
  const [sort, setSort] = useUrlSort()
  const columns: Column<PersonView>[] = [
    { key: 'name', head: 'Name', className: 'whitespace-nowrap', sortBy: (p) => p.name, cell: (p) => p.name },
    { key: 'roles', head: 'Roles', className: 'whitespace-nowrap', sortBy: (p) => roleWords(p, machineName), cell: (p) => roleWords(p, machineName) || <span className="text-ink-2">none</span> },
    { key: 'email', head: 'E-mail', sortBy: (p) => p.email, cell: (p) => p.email, className: 'text-ink-2' },
    { key: 'state', head: 'State', className: 'whitespace-nowrap', sortBy: (p) => p.state, cell: (p) => <StateOfPerson person={p} /> },
  ]
  const withEmail = people.some((p) => p.email !== null)
  return (
    <Table className="max-xl:overflow-x-auto" label="people" rows={people} columns={columns.filter((c) => withEmail || c.key !== 'email')} rowKey={(p) => String(p.id)} rowTo={(p) => paths.person(p.id)} sort={sort} onSort={setSort} empty="Nobody fits the filter." />
  )
}

/** Invited, active or disabled; and whether a right to sign waits. */
export function StateOfPerson({ person }: { person: PersonView }) {
  const waits = person.signingHold !== null || person.roles.some((r) => !r.confirmed)
  return (
    <>
      <span className={person.state === 'disabled' ? 'text-ink-2' : ''}>{person.state}</span>
      {waits && person.state !== 'disabled' && <span className="text-13 text-plum">, signing waits for confirmation</span>}
      {person.secondFactor === true && person.state !== 'disabled' && <span className="text-13 text-ink-2">, second factor</span>}
    </>
  )
}
