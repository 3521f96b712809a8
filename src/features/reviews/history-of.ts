import type { ChangeEventView, DraftPointView, SignatureView } from '../../../shared/contract/changes.ts'

export type Step = { kind: 'event'; event: ChangeEventView; voided: SignatureView[] } | { kind: 'points'; points: DraftPointView[] }

const voids: readonly ChangeEventView['kind'][] = ['returned', 'signature void', 'brought up to date', 'cancelled']

/**
 * The steps of a change in the order of time, with the draft points between them.
 *
 * A void signature is told of at the step that voided it: the first such step after it was signed. Draft points of one person with no step
 * between are one entry. Points come newest first, as the server lists them.
 */
export function historyOf(events: readonly ChangeEventView[], signatures: readonly SignatureView[], points: readonly DraftPointView[]): Step[] {
  const voidedAt = (event: ChangeEventView) =>
    voids.includes(event.kind) ? signatures.filter((s) => s.void && s.at <= event.at && !events.some((e) => voids.includes(e.kind) && e.at >= s.at && e.at < event.at)) : []
  const all: (Step & { at: string })[] = [
    ...events.map((event): Step & { at: string } => ({ kind: 'event', event, voided: voidedAt(event), at: event.at })),
    ...points.toReversed().map((p): Step & { at: string } => ({ kind: 'points', points: [p], at: p.at })),
  ]
  // A stable sort: at one moment the step stands before its points, as "drafted" before point 1.
  const steps: Step[] = []
  for (const { at: _at, ...step } of all.toSorted((a, b) => a.at.localeCompare(b.at))) {
    const last = steps.at(-1)
    if (step.kind === 'points' && last?.kind === 'points' && last.points[0].by === step.points[0].by) last.points.push(...step.points)
    else steps.push(step)
  }
  return steps
}
