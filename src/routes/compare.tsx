import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { lazy, Suspense } from 'react'
import { useSearchParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import type { ComparedSide } from '../../shared/contract/comparisons.ts'
import { PageHead } from '../components/layout/page-head.tsx'
import { Region } from '../components/layout/region.tsx'
import { useUrlText } from '../components/layout/use-url-state.ts'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { ViewSwitch } from '../components/ui/view-switch.tsx'
import { Waiting } from '../components/ui/waiting.tsx'
import { Comparison, type CompareBy } from '../features/comparisons/components/comparison.tsx'
import { SidePicker } from '../features/comparisons/components/side-picker.tsx'
import { comparisonQuery } from '../features/comparisons/queries.ts'
import { machinesQuery } from '../features/machines/queries.ts'
import { queryClient } from '../lib/query-client.ts'

const TextDiff = lazy(() => import('../features/reviews/components/text-diff.tsx'))

export async function loader({ request }: LoaderFunctionArgs) {
  const { searchParams } = new URL(request.url)
  const [a, b] = [searchParams.get('a'), searchParams.get('b')]
  if (a && b) void queryClient.prefetchQuery(comparisonQuery(a, b))
  return queryClient.ensureQueryData(machinesQuery)
}

const views: readonly CompareBy[] = ['value', 'register', 'text']

export function Component() {
  const machines = useSuspenseQuery(machinesQuery).data
  const [a, setA] = useUrlText('a')
  const [b, setB] = useUrlText('b')
  const [by] = useUrlText('by')
  const [search] = useSearchParams()
  const query = useQuery({ ...comparisonQuery(a, b), enabled: a !== '' && b !== '' })
  const shown = views.find((v) => v === by) ?? 'value'
  const to = (view: CompareBy) => {
    const next = new URLSearchParams(search)
    next.set('by', view)
    return `?${next.toString()}`
  }
  return (
    <>
      <PageHead title="Compare" actions={a && b ? <LinkButton to={paths.compare({ a: b, b: a })}>Swap</LinkButton> : null}>
        any two releases, changes, revisions and read-backs
      </PageHead>
      {machines.length === 0 ? (
        <EmptyState title="There is no machine yet.">What can be compared belongs to a machine.</EmptyState>
      ) : (
        <div className="mb-6 grid gap-4 md:grid-cols-2">
          <SidePicker label="A" side={a} machines={machines} shown={query.data?.a} onChange={setA} />
          <SidePicker label="B" side={b} machines={machines} shown={query.data?.b} onChange={setB} />
        </div>
      )}
      {machines.length > 0 && (a === '' || b === '') && <EmptyState title="Choose two things to compare.">The address of the page then names both, so that it can be sent to somebody.</EmptyState>}
      {a !== '' && b !== '' && (
        <Region query={query} what="the comparison" lines={10}>
          {(view) => (
            <>
              <p className="mb-4">
                <SideName side={view.a} /> <span className="text-ink-2">against</span> <SideName side={view.b} />
              </p>
              <ViewSwitch label="ways to compare" views={views.map((v) => ({ label: `by ${v}`.replace('by text', 'as text'), to: to(v), current: v === shown }))} />
              <div className="mt-5">
                <Comparison
                  view={view}
                  by={shown}
                  text={
                    <Suspense fallback={<Waiting />}>
                      <TextDiff before={view.textA} after={view.textB} />
                    </Suspense>
                  }
                />
              </div>
            </>
          )}
        </Region>
      )}
    </>
  )
}

function SideName({ side }: { side: ComparedSide }) {
  const to = side.release ? paths.release(side.release.machine, side.release.version) : side.change ? paths.changeReview(side.change) : null
  return (
    <>
      {to ? <TextLink to={to}>{side.label}</TextLink> : <b>{side.label}</b>} <span className="text-13 text-ink-2">{side.note}</span>
    </>
  )
}
