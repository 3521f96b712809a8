import { Arrow } from '../../../components/ui/arrow.tsx'
import { Num } from '../../../components/ui/num.tsx'

export interface BeforeAfterProps {
  before: number | string | null
  after: number | string | null
  unit?: string
  digits?: number
  className?: string
}

/** "55.3 → 46.4 °": what was, what is; one figure where nothing was before. */
export function BeforeAfter({ before, after, unit, digits, className = '' }: BeforeAfterProps) {
  const of = (v: number | string | null) => (typeof v === 'string' ? v : <Num value={v} digits={digits} />)
  return (
    <span className={`whitespace-nowrap ${className}`}>
      {before !== null && before !== '' && (
        <>
          {of(before)}
          <Arrow />
        </>
      )}
      <span className="font-medium">{typeof after === 'string' ? after : <Num value={after} unit={unit} digits={digits} />}</span>
    </span>
  )
}
