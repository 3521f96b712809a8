import { paths } from '../../../app/paths.ts'
import type { ReleaseSummary } from '../../../../shared/contract/releases.ts'
import type { ShownRelease } from '../../../../shared/contract/machines.ts'
import { ReleaseMark } from '../../../components/ui/release-mark.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { Time } from '../../../components/ui/time.tsx'

/** The machine's current release in large; or that it has none, and which one the page shows instead. */
export function CurrentRelease({ machine, current, shown }: { machine: string; current: ReleaseSummary | null; shown: ShownRelease | null }) {
  if (!current)
    return (
      <div>
        <div className="text-13 text-ink-2">current release</div>
        <div className="text-16">none</div>
        <div className="text-13 text-ink-2">{shown ? <>shown: <WithdrawnRelease machine={machine} version={shown.version} /></> : 'nothing is released yet'}</div>
      </div>
    )
  return (
    <div>
      <div className="text-13 text-ink-2">current release</div>
      <div className="flex items-end gap-3">
        <TextLink to={paths.release(machine, current.version)} className="num border-0 text-28 leading-none text-ink">{current.version}</TextLink>
        <div className="text-13 leading-4 text-ink-2">
          <Time at={current.releasedAt} style="date" />
          <br />
          {current.releasedBy}
        </div>
      </div>
    </div>
  )
}

function WithdrawnRelease({ machine, version }: { machine: string; version: string }) {
  return (
    <span className="inline-flex items-center gap-2">
      <TextLink to={paths.release(machine, version)} className="num">{version}</TextLink>
      <ReleaseMark state="withdrawn" />
    </span>
  )
}

/** Which release the values of a page come from. */
export function FromRelease({ machine, shown }: { machine: string; shown: ShownRelease }) {
  if (shown.withdrawn) return <WithdrawnRelease machine={machine} version={shown.version} />
  return <TextLink to={paths.release(machine, shown.version)} className="num">{shown.version}</TextLink>
}
