import type { SessionView } from '../../../../shared/contract/people.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { useEndSession } from '../mutations.ts'

/** Where the person is signed in. */
export function SessionList({ sessions }: { sessions: readonly SessionView[] }) {
  const end = useEndSession()
  const columns: Column<SessionView>[] = [
    { key: 'since', head: 'Signed in', cell: (s) => <Time at={s.createdAt} style="long" /> },
    { key: 'seen', head: 'Last seen', cell: (s) => <Time at={s.seenAt} style="long" /> },
    {
      key: 'end',
      head: <span className="sr-only">end</span>,
      align: 'end',
      cell: (s) =>
        s.current ? (
          <span className="text-13 text-ink-2">this one</span>
        ) : (
          <Button small pending={end.isPending && end.variables === s.id} onClick={() => end.mutate(s.id)}>
            End it
          </Button>
        ),
    },
  ]
  return (
    <>
      <Table label="sessions" rows={sessions} columns={columns} rowKey={(s) => s.id} />
      <ProblemPanel className="mt-2" problem={end.error} />
    </>
  )
}
