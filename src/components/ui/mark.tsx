/** The ball in its notch: Detent's mark. Decorative; the word beside it names it. */
export function Mark({ size = 28 }: { size?: number }) {
  return (
    <svg width={size} height={size * 0.72} viewBox="0 0 30 21.6" aria-hidden="true">
      <path d="M1 7H8l7 9.5L22 7h7" fill="none" stroke="var(--ink)" strokeWidth="1.9" strokeLinejoin="round" />
      <circle cx="15" cy="6.8" r="5.1" fill="var(--brass)" />
    </svg>
  )
}
