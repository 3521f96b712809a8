import { useState } from 'react'
import type { BenchKeys, BenchKeyView } from '../../../../shared/contract/bench-keys.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { ConfirmByName } from '../../../components/ui/confirm-by-name.tsx'
import { Table, type Column } from '../../../components/ui/table.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { useRevokeBenchKey } from '../mutations.ts'

/** A person's own keys: what they reach, until when, and when they were last used. */
export function BenchKeyList({ keys }: { keys: BenchKeys }) {
  const [revoking, setRevoking] = useState<BenchKeyView | null>(null)
  const revoke = useRevokeBenchKey()
  const columns: Column<BenchKeyView>[] = [
    {
      key: 'name',
      head: 'Key',
      cell: (k) => (
        <>
          <b className="font-medium">{k.name}</b>
          <span className="num block text-12 text-ink-2">{k.begins}…</span>
        </>
      ),
    },
    { key: 'machines', head: 'Machines', className: 'text-13', cell: (k) => k.machines.map((m) => keys.machines.find((r) => r.key === m)?.name ?? m).join(', ') },
    { key: 'used', head: 'Last used', className: 'text-13', cell: (k) => (k.lastUsedAt ? <Time at={k.lastUsedAt} /> : <span className="text-ink-2">never</span>) },
    { key: 'until', head: 'Until', className: 'text-13', cell: (k) => <Time at={k.expiresAt} style="date" /> },
    {
      key: 'act',
      head: <span className="sr-only">revoke</span>,
      align: 'end',
      cell: (k) =>
        k.state === 'in use' ? (
          <Button small kind="danger" onClick={() => setRevoking(k)} aria-label={`Revoke ${k.name}`}>
            Revoke…
          </Button>
        ) : (
          <span className="text-13 text-ink-2">{k.state}</span>
        ),
    },
  ]
  return (
    <>
      <Table label="bench keys" rows={keys.keys} columns={columns} rowKey={(k) => String(k.id)} empty="No bench key yet." />
      <ConfirmByName open={revoking !== null} onClose={() => setRevoking(null)} title={`Revoke “${revoking?.name}”`} name={revoking?.name ?? ''} noun="key" act="Revoke" pending={revoke.isPending} onConfirm={() => revoking && revoke.mutate(revoking.id, { onSuccess: () => setRevoking(null) })}>
        <p className="text-13">Scripts that use it are refused from this moment on. What they recorded stays.</p>
        <ProblemPanel problem={revoke.error} />
      </ConfirmByName>
    </>
  )
}
