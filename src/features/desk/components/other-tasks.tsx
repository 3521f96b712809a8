import type { DeskTask } from '../../../../shared/contract/desk.ts'
import { paths } from '../../../app/paths.ts'
import { LinkButton } from '../../../components/ui/link-button.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { formatDuration } from '../../../lib/format.ts'

/** Where a task leads, and what is done there. */
function wayTo(task: DeskTask): { to: string; act: string } {
  switch (task.kind) {
    case 'policy':
      return { to: paths.policy(task.machine), act: 'Read and sign' }
    case 'firmware':
      return { to: paths.firmwareVersion(task.line, task.version), act: 'Read and publish' }
    case 'signing right':
      return { to: paths.person(task.person), act: 'Confirm' }
    case 'mail':
      return { to: paths.mail(), act: 'Look' }
    case 'log':
      return { to: paths.evidence(task.machine, task.evidence), act: 'Name its columns' }
    case 'concession':
      return { to: paths.release(task.machine, task.release), act: 'Look' }
  }
}

/** What waits besides changes and boards, oldest first, each with its one act. */
export function OtherTasks({ tasks, now }: { tasks: readonly DeskTask[]; now: number }) {
  if (tasks.length === 0) return null
  return (
    <section aria-labelledby="also" className="mb-6">
      <SectionHeading id="also" aux={tasks.length > 1 ? 'longest waiting first' : undefined}>
        Also waiting
      </SectionHeading>
      <ul>
        {tasks.map((task) => {
          const { to, act } = wayTo(task)
          return (
            <li key={`${task.kind} ${task.title}`} className="grid grid-cols-[minmax(0,1fr)_auto] items-center gap-x-4 border-b border-hairline py-3">
              <span className="min-w-0 [overflow-wrap:anywhere]">
                <span className="font-medium">{task.title}</span>
                <span className="block text-13 text-ink-2">
                  {task.why}, waiting {formatDuration(Math.max(0, (now - Date.parse(task.since)) / 1000))}
                </span>
              </span>
              <LinkButton small to={to} aria-label={`${act}: ${task.title}`}>
                {act}
              </LinkButton>
            </li>
          )
        })}
      </ul>
    </section>
  )
}
