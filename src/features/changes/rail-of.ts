import type { ChangeEventKind, ChangeEventView, ChangeView } from '../../../shared/contract/changes.ts'
import type { RailPlace, RailProps, SignatureState } from '../../components/ui/rail.tsx'

const who = (e: ChangeEventView) => ({ who: e.person ?? 'Detent', at: e.at })

/** Events that lead back out of a place: what came before them no longer marks it. */
const back: readonly ChangeEventKind[] = ['returned', 'signature void', 'brought up to date']

/** A change's life as its rail draws it. */
export function railOf(change: Pick<ChangeView, 'state' | 'life' | 'events' | 'signatures' | 'peerReviewsNeeded'>): RailProps {
  const last = (kind: ChangeEventKind) => change.events.findLast((e) => e.kind === kind)
  const drafted = last('drafted')
  const submitted = last('submitted')
  const approved = last('approved')
  const released = last('released')
  const marks: RailProps['marks'] = {
    ...(drafted ? { draft: who(drafted) } : {}),
    ...(submitted ? { submitted: who(submitted) } : {}),
    ...(approved ? { approved: who(approved) } : {}),
    ...(released ? { released: who(released) } : {}),
  }
  const lost = change.events.findLast((e) => back.includes(e.kind))
  const cancelled = last('cancelled')
  return {
    at: placeOf(change),
    marks,
    struck: lost && change.life === 'returned' ? { place: 'submitted', word: 'returned', ...who(lost) } : lost && change.life === 'signature void' ? { place: 'approved', word: 'void', ...who(lost) } : undefined,
    cancelled: change.state === 'cancelled' && cancelled ? who(cancelled) : undefined,
    peerReview: signed(change, 'peer review', change.peerReviewsNeeded),
    release: signed(change, 'release', 1),
  }
}

/** How far it came: a cancelled change stays where it was. */
function placeOf(change: Pick<ChangeView, 'state' | 'events'>): RailPlace {
  if (change.state !== 'cancelled') return change.state
  const moved = change.events.findLast((e) => e.kind === 'submitted' || e.kind === 'approved' || e.kind === 'drafted' || e.kind === 'returned' || e.kind === 'brought up to date' || e.kind === 'signature void')
  return moved?.kind === 'approved' ? 'approved' : moved?.kind === 'submitted' || moved?.kind === 'signature void' ? 'submitted' : 'draft'
}

function signed(change: Pick<ChangeView, 'signatures'>, meaning: 'peer review' | 'release', needed: number): SignatureState {
  const own = change.signatures.filter((s) => s.meaning === meaning)
  if (own.filter((s) => !s.void).length >= needed) return 'signed'
  return own.some((s) => s.void) && own.every((s) => s.void) ? 'void' : 'open'
}
