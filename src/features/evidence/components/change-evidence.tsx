import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { Region } from '../../../components/layout/region.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { changeEvidenceQuery } from '../queries.ts'
import { EvidenceList } from './evidence-list.tsx'
import { UploadLog } from './upload-log.tsx'

export interface ChangeEvidenceProps {
  machine: string
  change: string
  revision: number
  /** joints that a log can be of, those that alter first */
  joints: readonly { key: string; name: string }[]
  /** null: none may be added; else why not now, or nothing */
  adding: { hold: string | null } | null
  onSent: (number: number) => void
}

/** The logs that speak for a change. Until the first signature its writers add to them; from there on they are part of what is signed. */
export function ChangeEvidence({ machine, change, revision, joints, adding, onSent }: ChangeEvidenceProps) {
  const logs = useQuery(changeEvidenceQuery(change, revision))
  const [joint, setJoint] = useState(joints[0]?.key ?? '')
  return (
    <section aria-labelledby="evidence" className="mt-8">
      <SectionHeading id="evidence" aux="its hashes are part of what is signed">
        Evidence
      </SectionHeading>
      <Region query={logs} what="the evidence" lines={2} isEmpty={(all) => all.length === 0} empty={<p className="py-2 text-13 text-ink-2">No bench log speaks for this change.</p>}>
        {(all) => <EvidenceList logs={all} of="change" />}
      </Region>
      {adding && joints.length > 0 && (
        <div className="mt-2">
          <Select label="a log of" width={220} value={joint} onChange={setJoint} options={joints.map((j) => ({ value: j.key, label: j.name }))} />
          <UploadLog belongs={{ machine, joint, change }} hold={adding.hold} onSent={onSent} />
        </div>
      )}
    </section>
  )
}
