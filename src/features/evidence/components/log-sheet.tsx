import type { EvidenceView } from '../../../../shared/contract/evidence.ts'
import { Hash } from '../../../components/ui/hash.tsx'
import { KeyValueList } from '../../../components/ui/key-value-list.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { formatBytes } from '../../../lib/format.ts'

/** What was read: rows, rate, columns with their units, and what was left out or put right. */
export function LogSheet({ log }: { log: EvidenceView }) {
  const { reading } = log
  const gone = reading ? (reading.repairs.length > 0 ? reading.repairs : ['Every row was read as it stands; there are no gaps.']) : []
  return (
    <section aria-labelledby="sheet" className="mb-8">
      <SectionHeading id="sheet">What was read</SectionHeading>
      <div className="mt-2 grid gap-x-10 gap-y-3 lg:grid-cols-2">
        <KeyValueList
          entries={[
            ...(reading
              ? [
                  { key: 'rows', value: <><Num value={String(reading.rows)} /> at <Num value={reading.rate} unit="Hz" digits={4} /></> },
                  { key: 'time', value: <><Num value={reading.from} unit="s" digits={4} /> to <Num value={reading.to} unit="s" digits={5} /></> },
                  { key: 'columns', value: log.mapping.map((m) => `${m.signal}: ${log.layout.columns[m.column].name} in ${m.unit}`).join('; ') },
                ]
              : []),
            { key: 'as sent', value: <>{formatBytes(log.bytes)}, SHA-256 <Hash hash={log.sha256} bytes={8} /></> },
            { key: 'as stored', value: <>{formatBytes(log.storedBytes)} gzipped</> },
          ]}
        />
        {gone.length > 0 && (
          <ul className="text-13" aria-label="what was found in the log">
            {[...log.layout.notes, ...gone].map((r) => (
              <li key={r}>{r}</li>
            ))}
            <li className="text-ink-2">Nothing was resampled or filled in.</li>
          </ul>
        )}
      </div>
    </section>
  )
}
