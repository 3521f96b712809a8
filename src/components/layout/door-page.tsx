import type { ReactNode } from 'react'
import { Mark } from '../ui/mark.tsx'

/** A page before the door: the mark, one sheet, nothing else. */
export function DoorPage({ title, wide = false, children }: { title: string; wide?: boolean; children: ReactNode }) {
  return (
    <main id="content" className={`mx-auto w-full px-[14px] py-10 sm:py-16 ${wide ? 'max-w-[1020px]' : 'max-w-[420px]'}`}>
      <title>{`${title} · Detent`}</title>
      <div className="mb-8 flex items-center gap-3">
        <Mark size={44} />
        <div>
          <p className="text-20 font-medium">Detent</p>
          <p className="text-13 text-ink-2">control parameters, checked, signed and released</p>
        </div>
      </div>
      <h1 className="mb-4 text-20">{title}</h1>
      {children}
    </main>
  )
}
