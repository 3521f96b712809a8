import type { CheckEvent } from '../../../shared/contract/checks.ts'
import { DomainError } from '../../http/errors.ts'
import type { EventSink } from '../../http/route.ts'
import type { JobBoard } from '../../jobs/job-board.ts'
import type { Change } from '../changes/change.entity.ts'
import { checkTopic } from './look-at-check.ts'
import { mapTopic } from './map-stability.ts'
import { retuneTopic } from './retune-joint.ts'

/** Streams that one person may hold open at once: a tab each, and some more. */
const mostOpen = 16
/** Least time between two messages, ms; the last state is always told. */
const pauseMs = 120

const open = new Map<number, number>()

/** Tells a person of the progress of a change's check, and of the map they asked for. @throws DomainError too-many-requests */
export function streamEvents(board: JobBoard, change: Change, person: number): (sink: EventSink) => () => void {
  const held = open.get(person) ?? 0
  if (held >= mostOpen) throw new DomainError('too-many-requests', `You follow ${held} checks already. Close one of the pages that show a check, and reload.`)
  const sources: [topic: string, event: () => CheckEvent | null][] = [
    [checkTopic(change), () => ({ kind: 'check', progress: board.progressOf(checkTopic(change)), finished: board.finishedOf(checkTopic(change)) })],
    ...(['map', 'retune'] as const).map((kind): [string, () => CheckEvent | null] => {
      const topic = kind === 'map' ? mapTopic(change, person) : retuneTopic(change, person)
      return [topic, () => {
        const hash = board.wantedBy(topic)[0]
        return hash === undefined ? null : { kind, hash, progress: board.progressOf(topic) }
      }]
    }),
  ]
  return (sink) => {
    open.set(person, (open.get(person) ?? 0) + 1)
    const timers = new Map<string, NodeJS.Timeout>()
    const tell = (event: () => CheckEvent | null) => {
      const now = event()
      if (now) sink.send(now)
    }
    const leave = sources.map(([topic, event]) => {
      tell(event)
      return board.listen(topic, () => {
        if (timers.has(topic)) return
        timers.set(topic, setTimeout(() => {
          timers.delete(topic)
          tell(event)
        }, pauseMs))
      })
    })
    return () => {
      for (const stop of leave) stop()
      for (const timer of timers.values()) clearTimeout(timer)
      const left = (open.get(person) ?? 1) - 1
      if (left > 0) open.set(person, left)
      else open.delete(person)
    }
  }
}
