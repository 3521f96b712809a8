import { useQuery } from '@tanstack/react-query'
import { Region } from '../../../components/layout/region.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { holds, useMe } from '../../../lib/me.ts'
import { jointEvidenceQuery } from '../queries.ts'
import { EvidenceList } from './evidence-list.tsx'
import { UploadLog } from './upload-log.tsx'

/** The bench logs of a joint, and the way to add one. */
export function JointEvidence({ machine, joint, onSent }: { machine: string; joint: string; onSent: (number: number) => void }) {
  const me = useMe()
  const logs = useQuery(jointEvidenceQuery(machine, joint))
  return (
    <section aria-labelledby="evidence" className="mb-8">
      <SectionHeading id="evidence" aux={logs.data && logs.data.length > 0 ? 'newest first' : undefined}>
        Bench logs
      </SectionHeading>
      <Region query={logs} what="its bench logs" lines={3} isEmpty={(all) => all.length === 0} empty={<p className="py-2 text-13 text-ink-2">None yet. A log is drawn over what the model predicts, and gives the drive train's values.</p>}>
        {(all) => <EvidenceList logs={all} of="joint" />}
      </Region>
      {holds(me, 'upload evidence', machine) && <UploadLog belongs={{ machine, joint }} onSent={onSent} />}
    </section>
  )
}
