import { useQuery } from '@tanstack/react-query'
import { paths } from '../../../app/paths.ts'
import { Region } from '../../../components/layout/region.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { count } from '../../../lib/format.ts'
import { holdingQuery } from '../queries.ts'

/** The boards that hold a release, as known: what withdrawing it touches. */
export function BoardsAffected({ machine, release }: { machine: string; release: string }) {
  const boards = useQuery(holdingQuery(machine, release))
  return (
    <Region query={boards} what="the boards that hold it" lines={2} isEmpty={(data) => data.boards.length === 0} empty={<p className="text-13 text-ink-2">No board is on record with it.</p>}>
      {(data) => (
        <div className="text-13">
          <p>
            {count(data.boards.length, 'board holds', 'boards hold')} it and {data.boards.length === 1 ? 'has' : 'have'} to be flashed again:
          </p>
          <ul className="mt-1 max-h-[22dvh] columns-2 overflow-y-auto">
            {data.boards.map((b) => (
              <li key={b.serial}>
                <TextLink to={paths.board(b.serial)} className="num">
                  {b.serial}
                </TextLink>{' '}
                <span className="text-ink-2">{b.joint?.name ?? 'off its joint'}</span>
              </li>
            ))}
          </ul>
        </div>
      )}
    </Region>
  )
}
