export type Origin = 'firmware' | 'family' | 'joint'

const STEPS: readonly { origin: Origin; x: number; y: number; h: number }[] = [
  { origin: 'firmware', x: 0.5, y: 8.5, h: 2.5 },
  { origin: 'family', x: 5, y: 5.5, h: 5.5 },
  { origin: 'joint', x: 9.5, y: 2.5, h: 8.5 },
]

/** Where a value comes from: three steps, the one it stands on filled. */
export function OriginMark({ origin, children = origin }: { origin: Origin; children?: React.ReactNode }) {
  return (
    <span className="inline-flex items-center gap-[5px] text-12 whitespace-nowrap text-ink-2">
      <svg width="15" height="12" viewBox="0 0 15 12" aria-hidden="true" className="flex-none">
        {STEPS.map((s) => (
          <rect key={s.origin} x={s.x} y={s.y} width="4" height={s.h} fill={s.origin === origin ? 'currentColor' : 'none'} stroke="currentColor" strokeWidth="1" />
        ))}
      </svg>
      {children}
    </span>
  )
}
