import type { ReactNode } from 'react'
import type { ChangeView, SignatureView } from '../../../../shared/contract/changes.ts'
import { Hash } from '../../../components/ui/hash.tsx'
import { KeyValueList, type KeyValue } from '../../../components/ui/key-value-list.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { SignatureLine } from './signature-line.tsx'

export interface SignaturesPanelProps {
  change: ChangeView
  /** what the hash stands for, in figures */
  signed: readonly KeyValue[]
  /** the forms for whoever may sign now; null: the server's reason is shown instead */
  peerReview: ReactNode | null
  release: ReactNode | null
}

/** The two signatures of a change: what they bind to, who signed what and when, and the form for the one whose turn it is. */
export function SignaturesPanel({ change, signed, peerReview, release }: SignaturesPanelProps) {
  const valid = (meaning: SignatureView['meaning']) => change.signatures.filter((s) => s.meaning === meaning && !s.void)
  const reviews = valid('peer review')
  const needed = Math.max(change.peerReviewsNeeded, reviews.length)
  const [releaseSignature] = valid('release')
  const lost = change.signatures.filter((s) => s.void)
  const open = change.state === 'submitted' || change.state === 'approved'
  const slots = Array.from({ length: needed }, (_, i) => reviews[i])
  const firstOpen = slots.findIndex((s) => s === undefined)
  return (
    <section aria-label="signatures">
      <SectionHeading>Signatures</SectionHeading>
      <div className="sheet mt-2">
        <Part>
          {change.contentHash ? (
            <>
              <p className="text-13 text-ink-2">Every signature binds to this content and its check</p>
              <Hash hash={change.contentHash} className="mt-[2px] block !text-ink [overflow-wrap:anywhere]" />
              <KeyValueList className="mt-2" entries={signed} />
            </>
          ) : (
            <p className="text-13 text-ink-2">{change.state === 'cancelled' ? 'The change was cancelled; nothing is signed.' : 'The content is hashed when the change is submitted; signatures bind to that hash.'}</p>
          )}
        </Part>
        {slots.map((s, i) => (
          <Part key={i}>{s ? <SignatureLine signature={s} number={i + 1} /> : <Open number={i + 1} meaning="peer review" why={!open ? null : i === firstOpen ? change.may.signPeerReview : null} form={i === firstOpen ? peerReview : null} />}</Part>
        ))}
        <Part>{releaseSignature ? <SignatureLine signature={releaseSignature} number={needed + 1} /> : <Open number={needed + 1} meaning="release" why={open ? change.may.release : null} form={release} waiting={open && change.state !== 'approved' ? 'after the peer review' : null} />}</Part>
        {lost.length > 0 && (
          <Part>
            <p className="mb-2 text-13 text-oxide">Void: the content or its check is no longer what was signed.</p>
            <div className="grid gap-3">
              {lost.map((s) => (
                <SignatureLine key={`${s.person} ${s.at}`} signature={s} number={null} />
              ))}
            </div>
          </Part>
        )}
      </div>
    </section>
  )
}

const Part = ({ children }: { children: ReactNode }) => <div className="border-b border-hairline px-[18px] py-[14px] last:border-0">{children}</div>

function Open({ number, meaning, why, form, waiting = null }: { number: number; meaning: string; why: ChangeView['may']['release'] | null; form: ReactNode | null; waiting?: string | null }) {
  return (
    <div>
      <div className="flex items-baseline gap-3">
        <span className="w-[18px] text-13 text-ink-2">{number}</span>
        <b>{meaning}</b>
        <span className={`ml-auto text-13 ${form ? 'font-medium text-brass' : 'text-ink-2'}`}>{form ? <>open<span className="no-print">, yours</span></> : (waiting ?? 'open')}</span>
      </div>
      {form && <div className="no-print mt-3">{form}</div>}
      {!form && !waiting && why && !why.allowed && <p className="mt-1 ml-[30px] text-13 text-ink-2">{why.why}</p>}
    </div>
  )
}
