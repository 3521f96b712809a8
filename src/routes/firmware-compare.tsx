import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { lazy, Suspense, useState } from 'react'
import { useParams } from 'react-router'
import { paths } from '../app/paths.ts'
import { PageHead } from '../components/layout/page-head.tsx'
import { Region } from '../components/layout/region.tsx'
import { useUrlText } from '../components/layout/use-url-state.ts'
import { Button } from '../components/ui/button.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { Select } from '../components/ui/select.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { Waiting } from '../components/ui/waiting.tsx'
import { VersionComparison } from '../features/firmware/components/version-comparison.tsx'
import { firmwareComparisonQuery, firmwareLinesQuery } from '../features/firmware/queries.ts'
import { queryClient } from '../lib/query-client.ts'

const TextDiff = lazy(() => import('../features/reviews/components/text-diff.tsx'))

export const loader = () => queryClient.ensureQueryData(firmwareLinesQuery)

export function Component() {
  const { line: key } = useParams()
  const line = useSuspenseQuery(firmwareLinesQuery).data.find((l) => l.key === key)
  const versions = line?.versions ?? []
  const [from, setFrom] = useUrlText('from')
  const [to, setTo] = useUrlText('to')
  const after = to || versions[0]?.version || ''
  const before = from || versions.find((v) => v.version !== after)?.version || ''
  const query = useQuery({ ...firmwareComparisonQuery(key!, before, after), enabled: before !== '' && after !== '' })
  const [text, setText] = useState(false)
  const options = versions.map((v) => ({ value: v.version, label: `${v.version}, ${v.state}` }))
  return (
    <>
      <PageHead title={`Compare versions of ${line?.name ?? key}`} kicker={<TextLink to={paths.firmware()}>Firmware</TextLink>}>
        what a register map added, removed, moved and rescaled
      </PageHead>
      {versions.length < 2 ? (
        <EmptyState title="There are no two versions to compare.">{line ? 'Draft another version first.' : 'There is no such firmware line.'}</EmptyState>
      ) : (
        <>
          <div className="mb-6 flex flex-wrap items-end gap-3">
            <Select label="From" width={200} value={before} onChange={setFrom} options={options} />
            <Select label="To" width={200} value={after} onChange={setTo} options={options} />
            <LinkButton to={paths.firmwareComparison(key!, { from: after, to: before })}>Swap</LinkButton>
          </div>
          <Region query={query} what="the comparison" lines={8}>
            {(view) => (
              <>
                <VersionComparison view={view} />
                <section aria-labelledby="schema-text" className="mt-8">
                  <SectionHeading
                    id="schema-text"
                    actions={
                      <Button small aria-expanded={text} onClick={() => setText((t) => !t)}>
                        {text ? 'Hide the text' : 'Show the text'}
                      </Button>
                    }
                  >
                    The schemas as text
                  </SectionHeading>
                  {text && (
                    <Suspense fallback={<Waiting />}>
                      <TextDiff before={view.schemaTextBefore} after={view.schemaTextAfter} />
                    </Suspense>
                  )}
                </section>
              </>
            )}
          </Region>
        </>
      )}
    </>
  )
}
