import { Time } from '../../../components/ui/time.tsx'
import type { FamilyView } from '../../../../shared/contract/machines.ts'
import { DriveTrainSheet } from './drive-train.tsx'

/** Earlier drive trains of a family, newest first, each with what stood before it. */
export function DriveTrainHistory({ history }: { history: FamilyView['driveTrainHistory'] }) {
  const ordered = history.toSorted((a, b) => b.number - a.number)
  return ordered.map((entry, i) => (
    <details key={entry.number} className="border-b border-hairline py-[6px]">
      <summary>
        <span className="num">d{entry.number}</span>{' '}
        <span className="text-13 text-ink-2">
          since <Time at={entry.at} style="long" />
          {i + 1 < ordered.length ? `, ${alteredWords(entry.driveTrain, ordered[i + 1].driveTrain)}` : ', the first'}
        </span>
      </summary>
      <DriveTrainSheet driveTrain={entry.driveTrain} before={ordered[i + 1]?.driveTrain} />
    </details>
  ))
}

function alteredWords(now: object, before: object): string {
  const [a, b] = [now, before] as [Record<string, unknown>, Record<string, unknown>]
  const altered = [...new Set([...Object.keys(a), ...Object.keys(b)])].filter((k) => JSON.stringify(a[k]) !== JSON.stringify(b[k]))
  return altered.length === 0 ? 'nothing altered' : `altered ${altered.join(', ')}`
}
