import type { MailView } from '../../../../shared/contract/mail.ts'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { count } from '../../../lib/format.ts'

const columns: Column<MailView>[] = [
  { key: 'subject', head: 'Subject', className: 'whitespace-nowrap', sortBy: (m) => m.subject, cell: (m) => m.subject },
  { key: 'to', head: 'To', className: 'whitespace-nowrap', sortBy: (m) => m.person ?? m.to, cell: (m) => <>{m.person ?? ''} <span className="text-13 text-ink-2">{m.to}</span></> },
  { key: 'at', head: 'Queued', sortBy: (m) => m.createdAt, cell: (m) => <Time at={m.createdAt} style="long" /> },
  { key: 'state', head: 'State', className: 'whitespace-nowrap', sortBy: (m) => m.state, cell: (m) => <MailState mail={m} /> },
]

export function MailState({ mail }: { mail: MailView }) {
  if (mail.state === 'failed') return <span className="text-oxide">failed after {count(mail.attempts, 'attempt')}</span>
  if (mail.state === 'queued') return <span className="text-plum">{mail.attempts === 0 ? 'to be sent' : `to be sent again, ${count(mail.attempts, 'attempt')} so far`}</span>
  if (mail.state === 'held') return <span className="text-ink-2">held for the day’s digest</span>
  if (mail.state === 'gathered') return <span>in the digest of {mail.sentAt && <Time at={mail.sentAt} />}</span>
  return <span>sent {mail.sentAt && <Time at={mail.sentAt} />}</span>
}

export function MailTable({ mails, chosen, onOpen }: { mails: readonly MailView[]; chosen: number | null; onOpen: (mail: MailView) => void }) {
  return <Table className="max-xl:overflow-x-auto" label="mail" rows={mails} columns={columns} rowKey={(m) => String(m.id)} onOpen={onOpen} chosen={(m) => m.id === chosen} />
}
