import type { BenchTask } from '../../../../shared/contract/boards.ts'
import { paths } from '../../../app/paths.ts'
import { BOARD_COLOUR, BoardShape } from '../../../components/ui/board-shape.tsx'
import { BoardMark } from '../../../components/ui/board-mark.tsx'
import { Caution } from '../../../components/ui/caution.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { LinkButton } from '../../../components/ui/link-button.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { count } from '../../../lib/format.ts'

const shown = 6

/** What waits for a builder: joints whose boards are not current, withdrawn releases first. */
export function AtTheBench({ tasks }: { tasks: readonly BenchTask[] }) {
  if (tasks.length === 0) return null
  const machines = [...new Map(tasks.map((t) => [t.machine, t.machineName]))]
  return (
    <section aria-labelledby="at-the-bench" className="mb-8">
      <SectionHeading id="at-the-bench" aux="withdrawn first">
        At the bench
      </SectionHeading>
      <ul>
        {tasks.slice(0, shown).map((task) => (
          <Task key={`${task.machine} ${task.joint}`} task={task} />
        ))}
      </ul>
      <p className="mt-2 flex flex-wrap gap-x-4 text-13">
        {tasks.length > shown && <span className="text-ink-2">{count(tasks.length - shown, 'more', 'more')}</span>}
        {machines.map(([key, name]) => (
          <TextLink key={key} to={paths.bench(key)}>
            bench of {name}
          </TextLink>
        ))}
      </p>
      <Caution className="mt-3" />
    </section>
  )
}

function Task({ task }: { task: BenchTask }) {
  return (
    <li className="grid grid-cols-[3rem_60px_minmax(0,1fr)_auto] items-center gap-x-3">
      <HexAddress address={task.address} className="text-right" />
      <span aria-hidden="true" className="relative grid min-h-[52px] items-center self-stretch">
        {/* The two lines run through every tap, whatever height its words take. */}
        <span className="absolute inset-y-0 left-[5.4px] w-[1.3px] bg-ink" />
        <span className="absolute inset-y-0 left-[53.4px] w-[1.3px] bg-ink" />
        <svg width="60" height="18" viewBox="0 0 60 18" className="relative">
          <path d="M6 9H54" stroke="var(--ink)" strokeWidth="1.2" />
          <BoardShape state={task.state} x={13} y={1.5} w={34} h={15} />
          <circle cx="6" cy="9" r="2" fill="var(--ink)" />
          <circle cx="54" cy="9" r="2" fill="var(--ink)" />
        </svg>
      </span>
      <div className="min-w-0 py-[6px]">
        <b className="font-medium">{task.name}</b>{' '}
        <span className="text-13 text-ink-2">
          {task.machineName}, {task.bus}
        </span>
        <div className="text-13" style={{ color: task.state === 'unknown' ? undefined : BOARD_COLOUR[task.state] }}>
          <BoardMark state={task.state} size={15}>
            {task.serial ? <><span className="num">{task.serial}</span> {task.state}</> : task.why}
          </BoardMark>
        </div>
      </div>
      <TaskAct task={task} />
    </li>
  )
}

function TaskAct({ task }: { task: BenchTask }) {
  if (task.state === 'unknown') return <LinkButton small to={paths.bench(task.machine, { joint: task.joint })}>Record</LinkButton>
  if (task.flash !== null && task.state !== 'not calibrated for this joint') return <LinkButton small to={paths.bench(task.machine, { joint: task.joint })}>Flash {task.flash}</LinkButton>
  return <LinkButton small to={task.serial ? paths.board(task.serial) : paths.bench(task.machine)}>Open</LinkButton>
}
