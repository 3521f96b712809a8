/** The ball in its notch: a row that is read. An empty notch is one that is not. */
export function ReadMark({ title, read, onChange }: { title: string; read: boolean; onChange: (read: boolean) => void }) {
  return (
    <button type="button" role="checkbox" aria-checked={read} aria-label={`${title} read`} title={read ? 'read; press to take it back' : 'mark as read'} className="no-print inline-grid size-7 flex-none place-items-center border-0 bg-transparent p-0" onClick={() => onChange(!read)}>
      <svg width="22" height="16" viewBox="0 0 22 16" aria-hidden="true">
        <path d="M0 5.5h5l6 7.5 6-7.5h5" fill="none" stroke={read ? 'var(--ink)' : 'var(--rule)'} strokeWidth={read ? 1.6 : 1.2} strokeLinejoin="round" />
        {read && <circle cx="11" cy="5.4" r="4.6" fill="var(--brass)" />}
      </svg>
    </button>
  )
}
