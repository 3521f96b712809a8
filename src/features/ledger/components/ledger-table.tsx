import type { LedgerEntryView } from '../../../../shared/contract/ledger.ts'
import { actWords, subjectWords } from '../../../components/layout/acts.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { Time } from '../../../components/ui/time.tsx'

export interface LedgerTableProps {
  entries: readonly LedgerEntryView[]
  machineName: (key: string) => string
  onOpen: (entry: LedgerEntryView) => void
  chosen: number | null
}

export function LedgerTable({ entries, machineName, onOpen, chosen }: LedgerTableProps) {
  const columns: Column<LedgerEntryView>[] = [
    { key: 'sequence', head: 'Entry', className: 'num', cell: (e) => e.sequence },
    { key: 'at', head: 'When', cell: (e) => <Time at={e.at} style="long" /> },
    { key: 'person', head: 'Who', className: 'whitespace-nowrap', cell: (e) => e.person },
    { key: 'act', head: 'Act', className: 'whitespace-nowrap', cell: (e) => <span className={e.act === 'refused' ? 'text-oxide' : ''}>{actWords(e)}</span> },
    { key: 'machine', head: 'Machine', cell: (e) => (e.machine === null ? '' : machineName(e.machine)) },
    { key: 'subject', head: 'About', className: 'text-13 whitespace-nowrap', cell: (e) => subjectWords(e) },
    { key: 'hash', head: 'Hash', align: 'end', cell: (e) => <Hash hash={e.hash} bytes={4} /> },
  ]
  return <Table dense className="max-xl:overflow-x-auto" label="ledger" rows={entries} columns={columns} rowKey={(e) => String(e.sequence)} onOpen={onOpen} chosen={(e) => e.sequence === chosen} empty="No entry fits the filter." />
}
