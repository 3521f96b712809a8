import { useQuery } from '@tanstack/react-query'
import { Link, useSearchParams } from 'react-router'
import { PageHead } from '../components/layout/page-head.tsx'
import { ProblemPanel } from '../components/problem/problem-panel.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { Waiting } from '../components/ui/waiting.tsx'
import { pathOf } from '../features/search/find-path.ts'
import { kindWords } from '../features/search/kind-words.ts'
import { searchQuery } from '../features/search/queries.ts'
import { count } from '../lib/format.ts'

/** Everything that fits the words asked for, by kind. */
export function Component() {
  const [address] = useSearchParams()
  const asked = (address.get('q') ?? '').trim()
  const search = useQuery(searchQuery(asked, { all: true }))
  const groups = asked === '' ? [] : (search.data?.groups ?? [])
  return (
    <>
      <PageHead title={asked === '' ? 'Search' : `“${asked}”`} documentTitle={`Search: ${asked}`} kicker={asked === '' ? undefined : 'search'} />
      <div className="grid max-w-[980px] gap-6" aria-live="polite">
        {groups.map(({ kind, finds, more }) => (
          <section key={kind} aria-label={kindWords[kind]}>
            <SectionHeading aux={more ? `the first ${finds.length}` : count(finds.length, 'find')}>{kindWords[kind]}</SectionHeading>
            <ul>
              {finds.map((f, i) => (
                <li key={i} className="flex flex-wrap items-baseline gap-x-3 border-b border-hairline py-[6px] last:border-rule">
                  <Link className="row-link" to={pathOf(f.at)}>
                    {f.name}
                  </Link>
                  <span className="text-13 text-ink-2">{f.note}</span>
                </li>
              ))}
            </ul>
          </section>
        ))}
        {search.isError ? (
          <ProblemPanel problem={search.error} onRetry={() => void search.refetch()} />
        ) : asked !== '' && search.data === undefined ? (
          <Waiting what="the finds" lines={3} />
        ) : (
          groups.length === 0 && (
            <EmptyState title={asked === '' ? 'Nothing is asked for.' : 'Nothing is called like that.'}>
              Machines, joints, families, parameters, values (3.2), register and bus addresses (0x33), boards by serial number, changes, releases, firmware, people, and hashes by their first four digits or more. Press / and write.
            </EmptyState>
          )
        )}
      </div>
    </>
  )
}
