export function Chevron({ up = false }: { up?: boolean }) {
  return (
    <svg width="10" height="6" viewBox="0 0 10 6" aria-hidden="true" style={{ flex: 'none' }}>
      <path d={up ? 'M1 5l4-4 4 4' : 'M1 1l4 4 4-4'} fill="none" stroke="var(--ink-2)" strokeWidth="1.5" />
    </svg>
  )
}
