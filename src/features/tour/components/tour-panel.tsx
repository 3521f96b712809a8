import { useQueryClient } from '@tanstack/react-query'
import { useEffect, useRef } from 'react'
import { useNavigate } from 'react-router'
import type { BoardList } from '../../../../shared/contract/boards.ts'
import type { ChangeSummary } from '../../../../shared/contract/changes.ts'
import type { ReleaseSummary } from '../../../../shared/contract/releases.ts'
import { Button } from '../../../components/ui/button.tsx'
import { get } from '../../../lib/api-client.ts'
import { endTour, goToStep, leaveTour } from '../../../lib/tour-state.ts'
import { tourSteps } from '../steps.ts'
import { TourRail } from './tour-rail.tsx'

/** The tour stands in a corner and blocks nothing: the pages under it are the real ones. Esc leaves it; it is taken up again where it was left. */
export default function TourPanel({ step }: { step: number }) {
  const at = Math.min(step, tourSteps.length - 1)
  const { title, text, look, to } = tourSteps[at]
  const client = useQueryClient()
  const navigate = useNavigate()
  const heading = useRef<HTMLHeadingElement>(null)

  useEffect(() => {
    let wanted = true
    const sights = async () => {
      const read = <T,>(path: string) => client.fetchQuery({ queryKey: ['tour', path], queryFn: () => get<T>(path), staleTime: 60_000 })
      const [changes, releases, { boards }] = await Promise.all([read<ChangeSummary[]>('/changes'), read<ReleaseSummary[]>('/releases'), read<BoardList>('/boards')])
      if (!wanted) return
      await navigate(to({ changes, releases, boards }))
      heading.current?.focus()
    }
    // The page that is open stays when the examples can't be read; its own error says why.
    void sights().catch(() => {})
    return () => void (wanted = false)
  }, [client, navigate, to])

  return (
    <aside
      aria-labelledby="tour-title"
      className="tour"
      onKeyDown={(event) => {
        if (event.key === 'Escape') leaveTour()
      }}
    >
      <TourRail at={at} of={tourSteps.length} />
      <h2 id="tour-title" ref={heading} tabIndex={-1} className="mt-2 text-16 outline-none">
        {title}
      </h2>
      <p className="mt-1 text-13">{text}</p>
      <p className="mt-2 text-13 text-ink-2">{look}</p>
      <div className="mt-3 flex flex-wrap items-center gap-2">
        {at > 0 && (
          <Button small onClick={() => goToStep(at - 1)}>
            Back
          </Button>
        )}
        {at < tourSteps.length - 1 ? (
          <Button small kind="primary" onClick={() => goToStep(at + 1)}>
            Next
          </Button>
        ) : (
          <Button small kind="primary" onClick={() => endTour()}>
            Done
          </Button>
        )}
        <span className="flex-1" />
        <button type="button" className="link text-13" onClick={() => leaveTour()}>
          leave, take it up later
        </button>
      </div>
    </aside>
  )
}
