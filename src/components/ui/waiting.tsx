/** While something loads: lines of about its shape. Announced once, quietly. */
export function Waiting({ what = 'the page', lines = 3, className = '' }: { what?: string; lines?: number; className?: string }) {
  return (
    <div role="status" className={`grid gap-2 ${className}`}>
      <span className="sr-only">Waiting for {what}.</span>
      {Array.from({ length: lines }, (_, i) => (
        <span key={i} aria-hidden="true" className="waiting block h-[14px]" style={{ width: `${[92, 76, 84, 58][i % 4]}%` }} />
      ))}
    </div>
  )
}
