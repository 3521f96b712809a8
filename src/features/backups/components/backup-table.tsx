import type { BackupView } from '../../../../shared/contract/backups.ts'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { count, formatBytes } from '../../../lib/format.ts'

const occasions = { daily: 'daily', asked: 'asked for', command: 'command line', 'before migrating': 'before the schema was altered' } as const

/** What is not as it should be with a backup; else that it was whole when it was made. */
function Whole({ backup }: { backup: BackupView }) {
  const { trouble } = backup
  if (trouble.length === 0) return <FindingMark level="pass">whole</FindingMark>
  return (
    <FindingMark level="block">
      lacks {count(trouble.length, 'stored file')}: {trouble.map((t) => `${t.sha256.slice(0, 8)} ${t.what}`).join(', ')}
    </FindingMark>
  )
}

const columns: Column<BackupView>[] = [
  { key: 'name', head: 'Backup', className: 'num whitespace-nowrap', cell: (b) => b.name },
  { key: 'made', head: 'Made', className: 'whitespace-nowrap', cell: (b) => <><Time at={b.madeAt} style="long" /> <span className="text-13 text-ink-2">{occasions[b.occasion]}</span></> },
  { key: 'entries', head: 'Ledger up to', align: 'end', className: 'num', cell: (b) => b.ledger?.entries ?? 'empty' },
  { key: 'size', head: 'Database', align: 'end', className: 'whitespace-nowrap', cell: (b) => formatBytes(b.bytes) },
  { key: 'files', head: 'Stored files', align: 'end', className: 'whitespace-nowrap', cell: (b) => (b.files === 0 ? 'none' : `${b.files}, ${formatBytes(b.fileBytes)}`) },
  { key: 'whole', head: 'When made', cell: (b) => <Whole backup={b} /> },
  { key: 'key', head: 'Private key', cell: (b) => (b.privateKey ? <span className="text-oxide">in it</span> : 'not in it') },
  { key: 'hash', head: 'SHA-256', align: 'end', cell: (b) => <Hash hash={b.sha256} bytes={4} /> },
]

export function BackupTable({ backups }: { backups: readonly BackupView[] }) {
  return <Table dense className="max-xl:overflow-x-auto" label="backups" rows={backups} columns={columns} rowKey={(b) => b.name} empty="No backup was made yet." />
}
