import { useEffect } from 'react'
import { useLocation } from 'react-router'
import { helpGroups } from '../../shared/help/find-help.ts'
import { FilterField } from '../components/layout/filter-field.tsx'
import { PageHead } from '../components/layout/page-head.tsx'
import { fits, useUrlText } from '../components/layout/use-url-state.ts'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { HelpText } from '../components/ui/help-text.tsx'
import { Key } from '../components/ui/key.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { Button } from '../components/ui/button.tsx'
import { openTour } from '../lib/tour-state.ts'
import { count } from '../lib/format.ts'

/** Every explanation that the question marks open, in one place. */
export function Component() {
  const [filter, setFilter] = useUrlText('filter')
  const { hash } = useLocation()
  useEffect(() => {
    if (hash) document.getElementById(decodeURIComponent(hash.slice(1)))?.scrollIntoView()
  }, [hash])
  const groups = Object.entries(helpGroups).map(([kind, { title, topics }]) => ({
    kind, title, topics: Object.entries(topics).filter(([key, t]) => fits(filter, key, t.title, t.text, t.source)),
  }))
  return (
    <>
      <PageHead
        title="Help"
        actions={
          <>
            <FilterField label="filter explanations" value={filter} onChange={setFilter} />
            <Button onClick={() => openTour()}>Take the tour</Button>
          </>
        }
      >
        what each parameter, finding and figure is, its formula, and where that comes from
      </PageHead>
      <p className="mb-5 text-13 text-ink-2">
        <Key>F1</Key> explains the value or finding that the focus is on, <Key>/</Key> searches, <Key>f</Key> filters the rows of a page, <Key>Esc</Key> closes what is open.
      </p>
      <div className="grid gap-7">
        {groups.map(({ kind, title, topics }) => topics.length > 0 && (
          <section key={kind} aria-label={title}>
            <SectionHeading aux={count(topics.length, 'explanation')}>{title}</SectionHeading>
            <div className="mt-3 grid gap-x-8 gap-y-5 sm:grid-cols-2 lg:grid-cols-3">
              {topics.map(([key, help]) => (
                <article key={key} id={`${kind}:${key}`}>
                  <HelpText help={help} />
                </article>
              ))}
            </div>
          </section>
        ))}
        {groups.every((g) => g.topics.length === 0) && <EmptyState title="Nothing is explained in these words.">Take words out of the filter.</EmptyState>}
      </div>
    </>
  )
}
