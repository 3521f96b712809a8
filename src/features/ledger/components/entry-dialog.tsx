import type { LedgerEntryView } from '../../../../shared/contract/ledger.ts'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { KeyValueList } from '../../../components/ui/key-value-list.tsx'
import { Time } from '../../../components/ui/time.tsx'

/** One entry in full, as it went into the chain. */
export function EntryDialog({ entry, onClose }: { entry: LedgerEntryView; onClose: () => void }) {
  return (
    <Dialog open wide onClose={onClose} title={`Entry ${entry.sequence}: ${entry.act}`} actions={<Button onClick={onClose}>Close</Button>}>
      <KeyValueList
        entries={[
          { key: 'when', value: <Time at={entry.at} style="long" /> },
          { key: 'who', value: entry.person },
          ...(entry.machine === null ? [] : [{ key: 'machine', value: entry.machine }]),
          ...Object.entries(entry.subject).filter(([k]) => k !== 'machine').map(([key, value]) => ({ key, value: <span className="num break-all">{value}</span> })),
          { key: 'hash', value: <Hash hash={entry.hash} /> },
          { key: 'entry before', value: <Hash hash={entry.previousHash} /> },
        ]}
      />
      <div>
        <h3 className="mb-1 text-13">Details</h3>
        <pre tabIndex={0} aria-label="details" className="num max-h-[40vh] overflow-auto border border-hairline bg-paper p-3 text-12 whitespace-pre-wrap">{JSON.stringify(entry.details, null, 2)}</pre>
      </div>
    </Dialog>
  )
}
