/** The ball in the notch of the line below: marks the current place in the navigation and the view switch. Hang it in a `position: relative` link. */
export function PlaceBall({ width = 28, over = 'var(--paper)' }: { width?: 22 | 28; over?: string }) {
  const c = width / 2
  return (
    <svg width={width} height="14" viewBox={`0 0 ${width} 14`} aria-hidden="true">
      <path d={`M${c - 7.4} .5h14.8`} stroke={over} strokeWidth="2.4" />
      <path d={`M${c - 7.5} .5l7.5 8.5 7.5-8.5`} fill={over} stroke="var(--rule)" strokeWidth="1" />
      <circle cx={c} cy="1.9" r="4.3" fill="var(--brass)" />
    </svg>
  )
}
