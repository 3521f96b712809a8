import { useState } from 'react'
import type { ChangeView, ConcessionRequest } from '../../../../shared/contract/changes.ts'
import type { Finding } from '../../../../shared/contract/checks.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextArea } from '../../../components/ui/text-area.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'

export interface ConcessionDialogProps {
  /** findings outside policy without a request */
  open: readonly Finding[]
  requested: readonly ConcessionRequest[]
  /** how far one may go by the policy in force; null: any */
  rules: ChangeView['concessionRules']
  /** today, so that an end in the past is told at once */
  today: string
  onSave: (concessions: ConcessionRequest[]) => void
  onClose: () => void
  pending: boolean
  problem: unknown
}

type Ends = 'date' | 'count'

/** A request to release with a finding outside policy: characteristic, limit, reason, and its end by date or count. It is granted by the signatures. */
export function ConcessionDialog({ open, requested, rules, today, onSave, onClose, pending, problem }: ConcessionDialogProps) {
  const [key, setKey] = useState(open[0]?.key ?? '')
  const finding = open.find((f) => f.key === key) ?? open[0]
  const [characteristic, setCharacteristic] = useState(finding ? characteristicOf(finding) : '')
  const [limit, setLimit] = useState(finding ? limitOf(finding) : '')
  const [reason, setReason] = useState('')
  const [ends, setEnds] = useState<Ends>('date')
  const [until, setUntil] = useState('')
  const [boards, setBoards] = useState('')
  const [pressed, setPressed] = useState(false)
  const endError = ends === 'date' ? dayError(until, today, rules) : countError(boards.trim(), rules)
  const reasonError = reason.trim() === '' ? 'Say why it is safe all the same.' : null

  const choose = (next: string) => {
    const chosen = open.find((f) => f.key === next)
    setKey(next)
    if (!chosen) return
    setCharacteristic(characteristicOf(chosen))
    setLimit(limitOf(chosen))
  }
  const save = () => {
    setPressed(true)
    if (!finding || endError || reasonError || characteristic.trim() === '' || limit.trim() === '') return
    onSave([...requested, { finding: finding.key, characteristic: characteristic.trim(), limit: limit.trim(), reason: reason.trim(), until: ends === 'date' ? until : null, count: ends === 'count' ? Number(boards) : null }])
  }
  return (
    <Dialog
      open
      wide
      busy={pending}
      onClose={onClose}
      title={requested.length === 0 ? 'Concessions' : 'Concessions of this change'}
      actions={
        <>
          {finding && (
            <Button kind="primary" pending={pending} onClick={save}>
              Request it
            </Button>
          )}
          <Button onClick={onClose}>Close</Button>
        </>
      }
    >
      {requested.length > 0 && (
        <ul className="grid gap-2 border-b border-hairline pb-3 text-13">
          {requested.map((c) => (
            <li key={c.finding} className="flex flex-wrap items-baseline gap-x-3">
              <FindingMark level="concession needed" size={15}>
                {c.characteristic}, {c.limit}
              </FindingMark>
              <span className="text-ink-2">{c.until ? `until ${c.until}` : `for ${c.count} boards`}</span>
              <button type="button" className="link ml-auto" onClick={() => onSave(requested.filter((r) => r !== c))}>
                withdraw the request
              </button>
            </li>
          ))}
        </ul>
      )}
      {finding ? (
        <>
          <Select label="Finding" value={finding.key} onChange={choose} options={open.map((f) => ({ value: f.key, label: f.text }))} help={finding.remedy} />
          <TextField label="Characteristic" value={characteristic} onChange={setCharacteristic} maxLength={200} error={pressed && characteristic.trim() === '' ? 'Name what is outside policy.' : null} />
          <TextField label="Limit of the concession" value={limit} onChange={setLimit} maxLength={200} error={pressed && limit.trim() === '' ? 'Say how far it may go.' : null} />
          <TextArea label="Reason" value={reason} onChange={setReason} maxLength={2000} rows={4} error={pressed ? reasonError : null} />
          <div className="grid gap-3 sm:grid-cols-2">
            <Select<Ends> label="It ends" value={ends} onChange={setEnds} options={[{ value: 'date', label: 'on a day' }, { value: 'count', label: 'after a count of boards' }]} />
            {ends === 'date' ? (
              <TextField label="Last day" type="date" min={today} max={rules?.lastDay} help={rules && <>by policy {rules.lastDay} at the latest</>} value={until} onChange={setUntil} error={pressed ? endError : null} />
            ) : (
              <TextField label="Boards" mono help={rules && <>by policy {rules.mostBoards} at most</>} value={boards} onChange={setBoards} error={pressed ? endError : null} />
            )}
          </div>
        </>
      ) : (
        <p className="text-13 text-ink-2">Every finding outside policy has its request.</p>
      )}
      <ProblemPanel problem={problem} />
    </Dialog>
  )
}

function dayError(until: string, today: string, rules: ConcessionDialogProps['rules']): string | null {
  if (until === '') return 'A concession needs an end.'
  if (until < today) return 'This day has passed.'
  return rules && until > rules.lastDay ? `Policy allows ${rules.lastDay} at the latest.` : null
}

function countError(boards: string, rules: ConcessionDialogProps['rules']): string | null {
  if (!/^[1-9]\d{0,5}$/.test(boards)) return 'A count is a whole number from 1.'
  return rules && Number(boards) > rules.mostBoards ? `Policy allows ${rules.mostBoards} boards at most.` : null
}

const characteristicOf = (f: Finding) => [f.loop, f.kind].filter(Boolean).join(' ').slice(0, 200)
const limitOf = (f: Finding) => (f.value === null ? '' : `${Number(f.value.toPrecision(3))} ${f.unit}`.trim())
