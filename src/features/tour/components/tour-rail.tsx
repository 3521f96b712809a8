/** The tour's own rail: as many notches as steps, the ball in the one shown. */
export function TourRail({ at, of }: { at: number; of: number }) {
  const pitch = 36
  const notch = (i: number) => `L${i * pitch + 13} 5L${i * pitch + 18} 11L${i * pitch + 23} 5`
  const line = (n: number) => `M0 5${Array.from({ length: n }, (_, i) => notch(i)).join('')}`
  return (
    <p className="m-0">
      <svg width={of * pitch} height="14" viewBox={`0 0 ${of * pitch} 14`} aria-hidden="true">
        <path d={`${line(of)}L${of * pitch} 5`} fill="none" stroke="var(--rule)" strokeWidth="1.2" />
        <path d={line(at + 1)} fill="none" stroke="var(--ink)" strokeWidth="1.5" />
        <circle cx={at * pitch + 18} cy="4.6" r="4.2" fill="var(--brass)" />
      </svg>
      <span className="sr-only">
        step {at + 1} of {of}
      </span>
    </p>
  )
}
