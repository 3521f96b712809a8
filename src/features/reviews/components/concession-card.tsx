import type { ConcessionRequest } from '../../../../shared/contract/changes.ts'
import type { Finding } from '../../../../shared/contract/checks.ts'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { KeyValueList } from '../../../components/ui/key-value-list.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { count } from '../../../lib/format.ts'

export interface ConcessionCardProps {
  concession: ConcessionRequest
  number: number
  /** the finding it is for, as the check has it now; null when it is no longer found */
  finding: Finding | null
  granted: boolean
}

/** A request to release with a finding outside policy; the signatures on the change grant it. */
export function ConcessionCard({ concession, number, finding, granted }: ConcessionCardProps) {
  return (
    <section aria-label={`concession ${number}`} className="sheet border-l-[3px] border-l-plum px-[18px] py-3">
      <FindingMark level="concession needed">Concession {number}</FindingMark>
      <p className="mt-2">{concession.reason}</p>
      <KeyValueList
        className="mt-2"
        entries={[
          { key: 'covers', value: concession.characteristic },
          { key: 'limit', value: concession.limit },
          ...(concession.until ? [{ key: 'until', value: <Time at={`${concession.until}T12:00:00`} style="date" /> }] : []),
          ...(concession.count ? [{ key: 'for', value: count(concession.count, 'board') }] : []),
          { key: 'finding', value: finding ? finding.text : 'no longer found by the check' },
          { key: 'granted', value: granted ? 'by the signatures on this change' : 'with the signatures on this change' },
        ]}
      />
    </section>
  )
}
