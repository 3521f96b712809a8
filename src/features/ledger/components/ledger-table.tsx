import type { LedgerEntryView } from '../../../../shared/contract/ledger.ts'
import { actWords, subjectWords } from '../../../components/layout/acts.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { useWidth } from '../../../components/ui/use-width.ts'

export interface LedgerTableProps {
  entries: readonly LedgerEntryView[]
  machineName: (key: string) => string
  onOpen: (entry: LedgerEntryView) => void
  chosen: number | null
}

const inColour = (e: LedgerEntryView) => (e.act === 'refused' ? 'text-oxide' : '')

/** Entries as a table; on a narrow screen what was done, by whom and when stand in one cell, so that nothing is out of sight. */
export function LedgerTable({ entries, machineName, onOpen, chosen }: LedgerTableProps) {
  const [box, width] = useWidth<HTMLDivElement>(1200)
  const machineOf = (e: LedgerEntryView) => (e.machine === null ? '' : machineName(e.machine))
  const wide: Column<LedgerEntryView>[] = [
    { key: 'sequence', head: 'Entry', className: 'num', cell: (e) => e.sequence },
    { key: 'at', head: 'When', cell: (e) => <Time at={e.at} style="long" /> },
    { key: 'person', head: 'Who', className: 'whitespace-nowrap', cell: (e) => e.person },
    { key: 'act', head: 'Act', className: 'whitespace-nowrap', cell: (e) => <span className={inColour(e)}>{actWords(e)}</span> },
    { key: 'machine', head: 'Machine', cell: machineOf },
    { key: 'subject', head: 'About', className: 'text-13 whitespace-nowrap', cell: (e) => subjectWords(e) },
    { key: 'hash', head: 'Hash', align: 'end', cell: (e) => <Hash hash={e.hash} bytes={4} /> },
  ]
  const narrow: Column<LedgerEntryView>[] = [
    { key: 'sequence', head: 'Entry', className: 'num align-top', cell: (e) => e.sequence },
    {
      key: 'act',
      head: 'Act',
      className: 'whitespace-normal',
      cell: (e) => (
        <>
          <span className={inColour(e)}>{actWords(e)}</span>
          <span className="block text-13 text-ink-2">{[machineOf(e), subjectWords(e)].filter(Boolean).join(': ')}</span>
          <span className="block text-13 text-ink-2">
            {e.person}, <Time at={e.at} style="long" />
          </span>
        </>
      ),
    },
  ]
  return (
    <div ref={box}>
      <Table dense className="max-xl:overflow-x-auto" label="ledger" rows={entries} columns={width < 640 ? narrow : wide} rowKey={(e) => String(e.sequence)} onOpen={onOpen} chosen={(e) => e.sequence === chosen} empty="No entry fits the filter." />
    </div>
  )
}
