import { useState } from 'react'
import type { BoardEventView } from '../../../../shared/contract/boards.ts'
import { paths } from '../../../app/paths.ts'
import { Button } from '../../../components/ui/button.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { ReadBackDetails, ReadBackVerdict } from './read-back-result.tsx'

/** What was recorded of a board, or at a joint (then each line names its board), newest first. */
export function BoardHistory({ machine, events }: { machine: string; events: readonly (BoardEventView & { serial?: string })[] }) {
  return (
    <ol>
      {events.map((event) => (
        <Event key={event.id} event={event} machine={machine} />
      ))}
    </ol>
  )
}

function Event({ event, machine }: { event: BoardEventView & { serial?: string }; machine: string }) {
  const [open, setOpen] = useState(false)
  return (
    <li className="border-b border-hairline py-2 last:border-rule">
      <div className="grid items-baseline gap-x-4 gap-y-0 sm:grid-cols-[7.5rem_minmax(0,1fr)_auto]">
        <span className="text-13 text-ink-2">
          <Time at={event.at} />
        </span>
        <span className="min-w-0">
          {event.serial && (
            <TextLink className="num !border-0 !text-ink" to={paths.board(event.serial)}>
              {event.serial}
            </TextLink>
          )}{' '}
          <b className="font-medium">{event.kind}</b> <Where event={event} machine={machine} />
          {event.note && <span className="block text-13 text-ink-2 [overflow-wrap:anywhere]">{event.note}</span>}
        </span>
        <span className="text-13 text-ink-2">
          {event.person}
          {event.benchKey && `, by bench key “${event.benchKey}”`}
        </span>
      </div>
      {event.readBack && (
        <div className="mt-1 sm:ml-[8.5rem]">
          <div className="flex flex-wrap items-center gap-x-4">
            {!open && <ReadBackVerdict result={event.readBack} />}
            <Button kind="link" small aria-expanded={open} className="!px-0" onClick={() => setOpen(!open)}>
              {open ? 'less' : 'registers and file'}
            </Button>
          </div>
          {open && <ReadBackDetails result={event.readBack} />}
        </div>
      )}
    </li>
  )
}

function Where({ event, machine }: { event: BoardEventView; machine: string }) {
  const joint = event.joint && (
    <>
      at <TextLink to={paths.joint(machine, event.joint.key)}>{event.joint.name}</TextLink>
    </>
  )
  return (
    <span className="text-13 text-ink-2">
      {event.release && (
        <>
          <TextLink to={paths.release(machine, event.release)} className="num">
            {event.release}
          </TextLink>{' '}
        </>
      )}
      {joint}
      {event.kind === 'moved' && !event.joint && 'off its joint'}
      {event.from && `${joint || event.kind === 'moved' ? ', ' : ''}from ${event.from}`}
    </span>
  )
}
