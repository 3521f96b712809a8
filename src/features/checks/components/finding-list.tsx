import { useState } from 'react'
import type { ReactNode } from 'react'
import type { Finding } from '../../../../shared/contract/checks.ts'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { HelpButton } from '../../../components/ui/help-button.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { count } from '../../../lib/format.ts'

export interface FindingListProps {
  findings: readonly Finding[]
  /** name of a joint by its key */
  nameOf: (joint: string) => string
  /** narrow: mark, sentence and remedy under one another, as beside the editor */
  narrow?: boolean
  /** in the narrow form too, where the limit comes from */
  sources?: boolean
  /** at the end of a finding, as what is requested for it */
  note?: (finding: Finding) => ReactNode
}

/** Findings, gravest first; those that pass fold into one line that opens. */
export function FindingList({ findings, nameOf, narrow = false, sources = false, note }: FindingListProps) {
  const [open, setOpen] = useState(false)
  const grave = findings.filter((f) => f.level !== 'pass')
  const passed = findings.filter((f) => f.level === 'pass')
  const shown = open ? [...grave, ...passed] : grave
  return (
    <ul className="border-b border-hairline" aria-label="findings">
      {shown.map((f) => (
        <FindingRow key={f.key} finding={f} nameOf={nameOf} narrow={narrow} sources={sources} note={note?.(f)} />
      ))}
      {passed.length > 0 && !open && (
        <li className="flex items-center gap-3 border-t border-hairline py-[6px] text-13">
          <FindingMark level="pass" size={15}>{count(passed.length, 'finding')} without fault</FindingMark>
          <button type="button" className="link ml-auto" onClick={() => setOpen(true)}>
            show<span className="sr-only"> what passes</span>
          </button>
        </li>
      )}
    </ul>
  )
}

function FindingRow({ finding, nameOf, narrow, sources, note }: { finding: Finding; nameOf: (joint: string) => string; narrow: boolean; sources: boolean; note: ReactNode }) {
  const joints = finding.joints.map(nameOf).join(', ')
  const limit =
    finding.limit !== null ? (
      <>
        limit <Num value={String(Number(finding.limit.toPrecision(6)))} unit={finding.unit} />
      </>
    ) : null
  if (narrow)
    return (
      <li className="grid grid-cols-[18px_1fr] gap-x-3 border-t border-hairline py-[6px] text-13">
        <FindingMark level={finding.level} size={15} className="self-start pt-[2px]">
          <span className="sr-only">{finding.level}</span>
        </FindingMark>
        <div>
          <b>{finding.level}</b> {finding.text} <HelpButton topic={`finding:${finding.kind}`} about={finding.kind} />
          {finding.remedy && <p className="text-ink-2">{finding.remedy}</p>}
          {joints && !sources && <p className="text-12 text-ink-2">{joints}</p>}
          {sources && (limit || finding.source) && (
            <p className="text-12 text-ink-2">
              {limit}
              {limit && finding.source && ', '}
              {finding.source}
            </p>
          )}
          {note}
        </div>
      </li>
    )
  return (
    <li className="grid gap-x-4 gap-y-1 border-t border-hairline py-[7px] md:grid-cols-[150px_minmax(0,1fr)_minmax(0,260px)]">
      <FindingMark level={finding.level} className="self-start" />
      <div>
        {finding.text} <HelpButton topic={`finding:${finding.kind}`} about={finding.kind} />
        {finding.remedy && <p className="text-13 text-ink-2">{finding.remedy}</p>}
        {joints && <p className="text-12 text-ink-2">{joints}</p>}
      </div>
      <div className="text-13 text-ink-2 md:text-right">
        {note}
        {limit && <p>{limit}</p>}
        {finding.source && <p className="text-12">{finding.source}</p>}
      </div>
    </li>
  )
}
