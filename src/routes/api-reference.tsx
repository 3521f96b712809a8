import { useQuery } from '@tanstack/react-query'
import { PageHead } from '../components/layout/page-head.tsx'
import { FilterField } from '../components/layout/filter-field.tsx'
import { fits, useUrlText } from '../components/layout/use-url-state.ts'
import { ProblemPanel } from '../components/problem/problem-panel.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { Waiting } from '../components/ui/waiting.tsx'
import { operationsOf } from '../features/api-reference/api-document.ts'
import { Operation } from '../features/api-reference/components/operation.tsx'
import { apiDocumentQuery } from '../features/api-reference/queries.ts'
import { count } from '../lib/format.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => {
  void queryClient.prefetchQuery(apiDocumentQuery)
  return null
}

/** Every operation of the API, from its own document. */
export function Component() {
  const [filter, setFilter] = useUrlText('filter')
  const asked = useQuery(apiDocumentQuery)
  const shown = asked.data ? operationsOf(asked.data).filter((o) => fits(filter, o.path, o.summary, o.method, ...o.tags)) : []
  return (
    <>
      <PageHead
        title="API reference"
        actions={
          <>
            <FilterField label="filter operations" value={filter} onChange={setFilter} />
            <a className="btn" href="/api/openapi.json" download="detent-openapi.json">
              Take the document away
            </a>
          </>
        }
      >
        what a script on a bench computer or a build server can ask for; an OpenAPI {asked.data?.openapi ?? '3.1'} document
      </PageHead>
      {asked.data === undefined ? (
        asked.isError ? <ProblemPanel problem={asked.error} onRetry={() => void asked.refetch()} /> : <Waiting what="the document" lines={8} />
      ) : (
        <>
          <p className="mb-5 max-w-[72ch] text-13 text-ink-2">{asked.data.info.description}</p>
          <div className="grid gap-6">
            {asked.data.tags.map((tag) => {
              const operations = shown.filter((o) => o.tags.includes(tag.name))
              return operations.length === 0 ? null : (
                <section key={tag.name} aria-label={tag.name}>
                  <SectionHeading aux={count(operations.length, 'operation')}>{tag.name}</SectionHeading>
                  <p className="mb-1 text-13 text-ink-2">{tag.description}</p>
                  {operations.map((o) => (
                    <Operation key={o.operationId} operation={o} />
                  ))}
                </section>
              )
            })}
            {shown.length === 0 && <EmptyState title="No operation is called like that.">Take words out of the filter.</EmptyState>}
          </div>
        </>
      )}
    </>
  )
}
