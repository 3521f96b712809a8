import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import type { ChangeView } from '../../../../shared/contract/changes.ts'
import type { CarryOverPreview, CarryRow } from '../../../../shared/contract/firmware.ts'
import { Region } from '../../../components/layout/region.tsx'
import { valueText } from '../../../components/layout/value-text.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { count } from '../../../lib/format.ts'
import { useCarryOver } from '../mutations.ts'
import { carryOverQuery, firmwareLinesQuery } from '../queries.ts'

export interface CarryOverDialogProps {
  /** the draft as saved: what is shown is asked anew for each revision */
  change: Pick<ChangeView, 'key' | 'revision' | 'set'>
  /** joint or family chosen when it opens, such as "family:knee" */
  start?: string
  onClose: () => void
  /** the draft as it stands after */
  onCarried: (view: ChangeView) => void
}

/** What can be moved together: every family, and every joint alone. */
function scopesOf({ families, joints }: ChangeView['set']) {
  return [
    ...Object.entries(families).map(([key, f]) => ({ value: `family:${key}`, label: `${f.name}, ${count(Object.values(joints).filter((j) => j.family === key).length, 'joint')}` })),
    ...Object.entries(joints).map(([key, j]) => ({ value: `joint:${key}`, label: `${j.name} alone` })),
  ]
}

const jointsIn = ({ joints }: ChangeView['set'], scope: string) => {
  const [kind, key] = [scope.slice(0, scope.indexOf(':')), scope.slice(scope.indexOf(':') + 1)]
  return Object.entries(joints).filter(([name, j]) => (kind === 'family' ? j.family === key : name === key))
}

/** Moves joints to another version of their firmware, by its rules: everything it alters is shown before it is accepted. */
export function CarryOverDialog({ change, start, onClose, onCarried }: CarryOverDialogProps) {
  const lines = useQuery(firmwareLinesQuery)
  const carry = useCarryOver(change.key)
  const scopes = scopesOf(change.set)
  const [scope, setScope] = useState(start ?? scopes[0]?.value ?? '')
  const [to, setTo] = useState('')
  const here = jointsIn(change.set, scope)
  const line = here[0]?.[1].firmware.split(' ')[0]
  const targets = (lines.data?.find((l) => l.key === line)?.versions ?? []).filter((v) => v.state !== 'retired' && here.some(([, j]) => j.firmware !== `${line} ${v.version}`))
  const chosen = targets.some((v) => `${line} ${v.version}` === to) ? to : ''
  const wish = { to: chosen, ...(scope.startsWith('family:') ? { family: scope.slice(7) } : { joints: [scope.slice(6)] }) }
  const preview = useQuery({ ...carryOverQuery(change.key, change.revision, wish), enabled: chosen !== '' })
  const accept = () => preview.data && carry.mutate({ ...wish, seen: preview.data.seen }, { onSuccess: onCarried })
  const missing = chosen === '' ? 'Choose a version first.' : preview.data === undefined ? 'Read what it alters first.' : null
  return (
    <Dialog
      open
      wide
      onClose={onClose}
      busy={carry.isPending}
      title="Carry over to another firmware version"
      actions={
        <>
          <Button kind="primary" unavailable={missing} pending={carry.isPending} onClick={accept}>
            Accept into the draft
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </>
      }
    >
      <div className="flex flex-wrap gap-4">
        <Select label="What moves" width={260} value={scope} onChange={setScope} options={scopes} />
        <Select label="To" width={200} value={chosen} onChange={setTo} placeholder={targets.length === 0 ? 'no other version' : 'choose a version'} options={targets.map((v) => ({ value: `${line} ${v.version}`, label: `${line} ${v.version}${v.state === 'draft' ? ', draft' : ''}` }))} />
      </div>
      {chosen === '' ? (
        <p className="text-13 text-ink-2">{here.length === 0 ? 'No joint is chosen.' : `On ${[...new Set(here.map(([, j]) => j.firmware))].join(', ')} now.`}</p>
      ) : (
        <Region query={preview} what="what it alters" lines={5}>
          {(shown) => <Preview preview={shown} nameOf={(place, key) => (place === 'family' ? change.set.families[key]?.name : change.set.joints[key]?.name) ?? key} />}
        </Region>
      )}
      <ProblemPanel problem={carry.error} />
    </Dialog>
  )
}

const kindWords: Record<CarryRow['kind'], string> = { kept: 'kept', renamed: 'renamed', converted: 'converted', added: 'added', dropped: 'ends here' }

function Preview({ preview, nameOf }: { preview: CarryOverPreview; nameOf: (place: CarryRow['place'], key: string) => string }) {
  const altered = preview.rows.filter((r) => r.kind !== 'kept')
  const kept = preview.rows.length - altered.length
  return (
    <div className="grid gap-3">
      <p className="text-13">
        {count(preview.joints.length, 'joint')} {preview.joints.length === 1 ? 'moves' : 'move'} to <span className="num">{preview.to}</span>: {preview.joints.map((j) => j.name).join(', ')}.
      </p>
      {preview.problems.length > 0 && (
        <div className="border-l-2 border-plum bg-plum-wash px-3 py-2 text-13">
          <p className="font-medium text-plum">{count(preview.problems.length, 'value')} {preview.problems.length === 1 ? 'needs' : 'need'} you; {preview.problems.length === 1 ? 'it stays as it is' : 'they stay as they are'}.</p>
          <ul>
            {preview.problems.map((p) => (
              <li key={p.pointer}>
                <span className="num text-12 text-ink-2">{p.pointer}</span> {p.detail}
              </li>
            ))}
          </ul>
        </div>
      )}
      {altered.length > 0 && (
        <div className="overflow-x-auto" tabIndex={0} role="region" aria-label="what alters">
          <table className="table table-dense" aria-label="values that alter">
            <thead>
              <tr>
                <th scope="col">Of</th>
                <th scope="col">Before</th>
                <th scope="col">Now</th>
                <th scope="col">How</th>
              </tr>
            </thead>
            <tbody>
              {altered.map((r) => (
                <tr key={`${r.place} ${r.key} ${r.from ?? ''} ${r.to ?? ''}`}>
                  <td>{nameOf(r.place, r.key)}</td>
                  <td className="text-13">{r.from && <Side name={r.from} value={r.before} unit={r.fromUnit} />}</td>
                  <td className="text-13 text-brass">{r.to && <Side name={r.to} value={r.after} unit={r.toUnit} />}</td>
                  <td className="text-13">
                    {kindWords[r.kind]}
                    {r.rounded && <span className="text-ink-2">, to the nearest double</span>}
                  </td>
                </tr>
              ))}
            </tbody>
          </table>
        </div>
      )}
      {kept > 0 && <p className="text-13 text-ink-2">{count(kept, 'value')} {kept === 1 ? 'stays' : 'stay'} as {kept === 1 ? 'it is' : 'they are'}.</p>}
      {preview.defaults.length > 0 && (
        <div className="text-13">
          <p className="font-medium">The firmware’s own values differ, though nobody typed them:</p>
          <ul>
            {preview.defaults.map((d) => (
              <li key={d.parameter} className="border-b border-hairline py-1">
                {d.title || d.parameter} <span className="num">{valueText(d.before)}</span> <span aria-hidden="true">→</span>
                <span className="sr-only"> now </span> <span className="num text-brass">{valueText(d.after)}</span> {d.unit && <span className="unit">{d.unit}</span>} <span className="text-ink-2">{count(d.joints.length, 'joint')}</span>
              </li>
            ))}
          </ul>
        </div>
      )}
    </div>
  )
}

const Side = ({ name, value, unit }: { name: string; value: CarryRow['before']; unit: string }) => (
  <>
    <span className="text-12 text-ink-2">{name}</span> <span className="num">{valueText(value)}</span>
    {unit && <span className="unit ml-[.22em]">{unit}</span>}
  </>
)
