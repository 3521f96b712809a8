import type { LedgerEntryView } from '../../../shared/contract/ledger.ts'
import { Hash } from '../ui/hash.tsx'
import { Time } from '../ui/time.tsx'

const short = (value: string | number) => (/^[0-9a-f]{64}$/.test(String(value)) ? String(value).slice(0, 8) : String(value))

/** What an entry is about, besides its machine: "change dunlin-47, release 1.7.0". */
export const subjectWords = ({ subject }: LedgerEntryView): string =>
  Object.entries(subject).filter(([k]) => k !== 'machine').map(([k, v]) => `${k} ${short(v)}`).join(', ')

/** The act, and for a refusal what was asked. */
export const actWords = ({ act, details }: LedgerEntryView): string => (act === 'refused' && typeof details.asked === 'string' ? `refused: ${details.asked}` : act)

/** Entries of the ledger in few words, newest first. */
export function Acts({ entries }: { entries: readonly LedgerEntryView[] }) {
  return (
    <ul className="@container">
      {entries.map((e) => (
        <li key={e.sequence} className="grid grid-cols-[6.5rem_minmax(0,1fr)] items-baseline gap-x-3 border-b border-hairline py-[6px] text-13 last:border-rule @lg:grid-cols-[6.5rem_minmax(0,1fr)_9rem_5rem]">
          <span className="text-ink-2">
            <Time at={e.at} />
          </span>
          <span className="text-14">
            <span className={e.act === 'refused' ? 'text-oxide' : ''}>{actWords(e)}</span>
            {subjectWords(e) && <span className="text-13 text-ink-2"> {subjectWords(e)}</span>}
          </span>
          <span className="text-ink-2 col-start-2 @lg:col-start-auto">{e.person}</span>
          <Hash hash={e.hash} bytes={4} className="hidden text-right @lg:inline" />
        </li>
      ))}
    </ul>
  )
}
