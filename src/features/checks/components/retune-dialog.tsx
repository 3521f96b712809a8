import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { type LoopName } from '../../../../shared/contract/checks.ts'
import { retuneGains, type AskRetune, type RetuneGain } from '../../../../shared/contract/proposals.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Checkbox } from '../../../components/ui/checkbox.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { NumberField } from '../../../components/ui/number-field.tsx'
import { Progress } from '../../../components/ui/progress.tsx'
import { letters, modeOf } from '../letters.ts'
import { useStopCheck } from '../mutations.ts'
import { retuneQuery } from '../queries.ts'
import { useCheckStream } from '../use-check-stream.ts'
import { ProposalView } from './proposal-view.tsx'
import { optionalNumber, type ProposalDialogProps } from './starting-values-dialog.tsx'

const offered: Record<LoopName, RetuneGain[]> = { position: [...retuneGains], velocity: ['K_pv', 'K_iv', 'K_pc', 'K_ic'], current: ['K_pc', 'K_ic'] }
const usual: Record<LoopName, RetuneGain[]> = { position: ['K_pp', 'K_pv', 'K_iv'], velocity: ['K_pv', 'K_iv'], current: ['K_pc', 'K_ic'] }

/** The search wants a room to move in that holds the gain as it stands. */
function rangeProblem(from: string, to: string): string | null {
  const [low, high] = [optionalNumber(from), optionalNumber(to)]
  if (low.error ?? high.error) return low.error ?? high.error
  if (low.value === undefined || high.value === undefined) return 'Both factors are needed.'
  if (low.value <= 0 || low.value > 1) return 'The lower factor lies above 0 and up to 1.'
  return high.value < 1 || high.value > 100 ? 'The upper factor lies between 1 and 100.' : null
}

/** A search for the gains whose worst margin over the tolerances is the largest; nothing is put into the draft before one says so. */
export function RetuneDialog({ change, revision, joint, nameOf, pending, problem, onApply, onClose }: ProposalDialogProps) {
  const mode = modeOf(joint.candidate?.loops ?? {})
  const [gains, setGains] = useState<readonly RetuneGain[]>(usual[mode])
  const [from, setFrom] = useState('0.5')
  const [to, setTo] = useState('2')
  const [asked, setAsked] = useState<AskRetune | null>(null)
  const search = useQuery({ ...retuneQuery(change, revision, asked ?? { joint: joint.joint, gains: [] }), enabled: asked !== null })
  const stop = useStopCheck(change)
  const wrong = rangeProblem(from, to)
  const view = asked ? search.data : undefined
  const going = view !== undefined && !view.proposal && view.progress.state === 'running'
  useCheckStream(change, going)
  const halted = view && !view.proposal && (view.progress.state === 'stopped' || view.progress.state === 'failed') ? view.progress : null
  const send = () => {
    const next: AskRetune = { joint: joint.joint, gains: gains.map((gain) => ({ gain, from: Number(from), to: Number(to) })) }
    // The same question asked again goes on from where it was stopped.
    if (JSON.stringify(next) === JSON.stringify(asked)) void search.refetch()
    else setAsked(next)
  }
  return (
    <Dialog
      open
      wide
      title={`Robust retune of ${nameOf(joint.joint)}`}
      onClose={onClose}
      busy={pending}
      actions={
        <>
          {view?.proposal && (
            <Button kind="primary" pending={pending} unavailable={view.proposal.edits.length === 0 ? 'The draft holds these values already.' : null} onClick={() => onApply(view.proposal!.edits)}>
              Put into the draft
            </Button>
          )}
          <Button pending={search.isFetching || going} unavailable={wrong ?? (gains.length === 0 ? 'Choose a gain to move.' : null)} onClick={send}>
            {halted ? 'Go on' : view ? 'Search again' : 'Search'}
          </Button>
          <Button onClick={onClose}>Close</Button>
        </>
      }
    >
      <p className="text-13 text-ink-2">The worst margin over the corners is made as large as it gets; nine tenths of each bandwidth and the peak current are kept.</p>
      <fieldset>
        <legend className="label">Gains that may move</legend>
        <div className="flex flex-wrap gap-x-5 gap-y-2">
          {offered[mode].map((g) => (
            <Checkbox key={g} label={letters[g]?.words ?? g} checked={gains.includes(g)} onChange={(on) => setGains(retuneGains.filter((k) => (k === g ? on : gains.includes(k))))} />
          ))}
        </div>
      </fieldset>
      <div className="flex flex-wrap gap-4">
        <NumberField label="from" unit="×" width={110} value={from} onChange={setFrom} error={wrong} />
        <NumberField label="to" unit="×" width={110} value={to} onChange={setTo} />
      </div>
      <ProblemPanel problem={search.error} />
      {going && <Progress label="search" done={view.progress.done} total={Math.max(view.progress.total, 1)} noun="sets of gains" onStop={() => stop.mutate()} />}
      {halted && <p className="text-13 text-plum">{halted.state === 'failed' ? halted.problem : 'The search was stopped; what is done is kept.'}</p>}
      {view?.why && <p role="status">{view.why}</p>}
      {view?.proposal && <ProposalView proposal={view.proposal} joint={joint} nameOf={nameOf} />}
      <ProblemPanel problem={problem ?? stop.error} />
    </Dialog>
  )
}
