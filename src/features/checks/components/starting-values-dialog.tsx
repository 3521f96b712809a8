import { useState } from 'react'
import { loopNames, type JointCheck, type LoopName } from '../../../../shared/contract/checks.ts'
import { type AskStartingValues } from '../../../../shared/contract/proposals.ts'
import type { Edit } from '../../../../shared/parameters/edits.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { NumberField } from '../../../components/ui/number-field.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { parseNumber } from '../../../lib/format.ts'
import { useStartingValues } from '../mutations.ts'
import { ProposalView } from './proposal-view.tsx'

export interface ProposalDialogProps {
  change: string
  revision: number
  joint: JointCheck
  nameOf: (joint: string) => string
  /** the edits are being put into the draft */
  pending: boolean
  /** why they were not */
  problem: unknown
  onApply: (edits: readonly Edit[]) => void
  onClose: () => void
}

/** Text of an optional field: nothing, a number, or what is wrong with it. */
export function optionalNumber(text: string): { value?: number; error: string | null } {
  if (text.trim() === '') return { error: null }
  const parsed = parseNumber(text)
  return parsed.kind === 'number' ? { value: parsed.value, error: null } : { error: parsed.message }
}

/** Gains to start from, by published rules with the delays counted in; nothing is put into the draft before one says so. */
export function StartingValuesDialog({ change, joint, nameOf, pending, problem, onApply, onClose }: ProposalDialogProps) {
  const loops = loopNames.filter((l) => joint.candidate?.loops[l])
  const [wanted, setWanted] = useState<Partial<Record<LoopName, string>>>({})
  const [margin, setMargin] = useState('')
  const [chosen, setChosen] = useState(0)
  const ask = useStartingValues(change)
  const readings = Object.fromEntries(loops.map((l) => [l, optionalNumber(wanted[l] ?? '')]))
  const phase = optionalNumber(margin)
  const bad = phase.error !== null || loops.some((l) => readings[l].error !== null)
  const send = () => {
    const bandwidthHz = Object.fromEntries(loops.flatMap((l) => (readings[l].value === undefined ? [] : [[l, readings[l].value]])))
    const body: AskStartingValues = { joint: joint.joint, ...(Object.keys(bandwidthHz).length > 0 ? { bandwidthHz } : {}), ...(phase.value === undefined ? {} : { currentPhaseMarginDeg: phase.value }) }
    setChosen(0)
    ask.mutate(body)
  }
  const answer = ask.data
  const offers = answer?.kind === 'proposed' ? [answer.proposal, ...answer.others] : []
  const offer = offers[chosen]
  const ruleOf = (o: (typeof offers)[number]) => [...new Set(o.rules.map((r) => r.rule.split(',')[0]))].join(', ')
  return (
    <Dialog
      open
      wide
      title={`Starting values of ${nameOf(joint.joint)}`}
      onClose={onClose}
      busy={pending}
      actions={
        <>
          {offer && (
            <Button kind="primary" pending={pending} unavailable={offer.edits.length === 0 ? 'The draft holds these values already.' : null} onClick={() => onApply(offer.edits)}>
              Put into the draft
            </Button>
          )}
          <Button pending={ask.isPending} unavailable={bad ? 'A field above holds no number.' : null} onClick={send}>
            {offer ? 'Propose again' : 'Propose'}
          </Button>
          <Button onClick={onClose}>Close</Button>
        </>
      }
    >
      <p className="text-13 text-ink-2">Leave a bandwidth empty and it follows from the loop inside it. The fields ask for the crossover of each loop.</p>
      <div className="flex flex-wrap gap-4">
        {loops.map((l) => (
          <NumberField key={l} label={`${l} loop`} unit="Hz" width={130} value={wanted[l] ?? ''} onChange={(v) => setWanted({ ...wanted, [l]: v })} error={readings[l].error ?? fieldError(ask.error, `/bandwidthHz/${l}`)} />
        ))}
        <NumberField label="current phase margin" unit="°" width={130} value={margin} onChange={setMargin} error={phase.error ?? fieldError(ask.error, '/currentPhaseMarginDeg')} />
      </div>
      <ProblemPanel problem={ask.error} shown={[...loops.map((l) => `/bandwidthHz/${l}`), '/currentPhaseMarginDeg']} />
      {answer?.kind === 'none' && <p role="status">{answer.why} Nothing is proposed; the draft is as it was.</p>}
      {offers.length > 1 && <Select label="Rules" value={String(chosen)} onChange={(v) => setChosen(Number(v))} options={offers.map((o, i) => ({ value: String(i), label: `${ruleOf(o)}: ${o.figures.verdict}` }))} />}
      {offer && <ProposalView proposal={offer} joint={joint} nameOf={nameOf} />}
      <ProblemPanel problem={problem} />
    </Dialog>
  )
}
