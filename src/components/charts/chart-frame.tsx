import { useId, useState } from 'react'
import type { ReactNode } from 'react'
import { SectionHeading } from '../ui/section-heading.tsx'
import type { ChartNumbers } from './chart-numbers.ts'
import { ChartTable } from './chart-table.tsx'
import { csvText, downloadText } from './download.ts'

export interface ChartFrameProps {
  title: string
  level?: 2 | 3
  aux?: ReactNode
  legend?: ReactNode
  /** The same numbers; made only when they are asked for. */
  numbers: () => ChartNumbers
  /** Saves a picture under the name given. */
  onImage?: (name: string) => void
  children: ReactNode
  className?: string
}

/** What every chart has around it: heading, legend, and the ways to its numbers: table, image, CSV. */
export function ChartFrame({ title, level = 2, aux, legend, numbers, onImage, children, className = '' }: ChartFrameProps) {
  const [shown, setShown] = useState(false)
  const id = useId()
  const name = title.toLowerCase().replaceAll(/[^a-z0-9.]+/g, '-').replaceAll(/^-|-$/g, '') || 'chart'
  return (
    <figure className={className} aria-labelledby={id}>
      <SectionHeading
        level={level}
        id={id}
        aux={aux}
        actions={
          <>
            <button type="button" className="link" aria-expanded={shown} onClick={() => setShown(!shown)}>
              table<span className="sr-only"> of {title}</span>
            </button>
            {onImage && (
              <button type="button" className="link" onClick={() => onImage(`${name}.png`)}>
                image<span className="sr-only"> of {title}</span>
              </button>
            )}
            <button
              type="button"
              className="link"
              onClick={() => {
                const { head, rows } = numbers()
                downloadText(`${name}.csv`, csvText(head, rows))
              }}
            >
              csv<span className="sr-only"> of {title}</span>
            </button>
          </>
        }
      >
        {title}
      </SectionHeading>
      {legend && <div className="mt-1">{legend}</div>}
      {children}
      {shown && <ChartTable label={`numbers of ${title}`} {...numbers()} />}
    </figure>
  )
}
