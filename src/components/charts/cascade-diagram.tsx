import { useLayoutEffect, useRef, useState } from 'react'
import type { ReactNode, RefObject } from 'react'
import { CascadeWires } from './cascade-wires.tsx'
import type { CascadeBoxes, BlockName } from './cascade-wires.tsx'

export interface CascadeBlock {
  /** Quiet words in the block's head: "clamp ±3.20 A". */
  note?: ReactNode
  /** Value cells. */
  children: ReactNode
}

export interface CascadeDiagramProps {
  mode: 'position' | 'velocity' | 'current'
  /** Task rates as written: "2.000 kHz". */
  outerRate: string
  currentRate: string
  position?: CascadeBlock
  velocity?: CascadeBlock
  current: CascadeBlock
  driveTrain: CascadeBlock
  velocityWindow?: CascadeBlock
  sensor?: CascadeBlock
}

const TITLES: Record<BlockName, string> = { position: 'Position', velocity: 'Velocity', current: 'Current', driveTrain: 'Drive train', velocityWindow: 'Velocity window', sensor: 'Sensor' }

/**
 * The control cascade as a block diagram whose blocks hold values: reference from the left, feedback returning below. Wires follow the
 * blocks wherever they come to stand. Where there is less than 940 px the blocks stand under one another, in the order of the signal, without wires.
 */
export function CascadeDiagram({ mode, outerRate, currentRate, ...slots }: CascadeDiagramProps) {
  const [frame, boxes] = useBoxes()
  const blocks: Partial<Record<BlockName, CascadeBlock>> = slots
  const shown = (Object.keys(TITLES) as BlockName[]).filter((name) => {
    if (name === 'position') return mode === 'position' && blocks.position
    if (name === 'velocity' || name === 'velocityWindow') return mode !== 'current' && blocks[name]
    return blocks[name] !== undefined
  })
  return (
    <div className="@container/cascade">
      <div ref={frame} className="cascade" role="group" aria-label={`control cascade, ${mode} mode`}>
        {boxes && <CascadeWires boxes={boxes} mode={mode} outerRate={outerRate} currentRate={currentRate} />}
        {shown.map((name) => (
          <section key={name} data-block={name} aria-label={TITLES[name]} className="cascade-block">
            <header>
              {TITLES[name]}
              {blocks[name]?.note !== undefined && <span>{blocks[name]?.note}</span>}
            </header>
            {blocks[name]?.children}
          </section>
        ))}
      </div>
    </div>
  )
}

/** Where the blocks stand in the frame; null until they are laid out. */
function useBoxes(): [RefObject<HTMLDivElement | null>, CascadeBoxes | null] {
  const frame = useRef<HTMLDivElement>(null)
  const [boxes, setBoxes] = useState<CascadeBoxes | null>(null)
  useLayoutEffect(() => {
    const element = frame.current
    if (!element || typeof ResizeObserver === 'undefined') return
    const read = () => {
      const origin = element.getBoundingClientRect()
      const next: CascadeBoxes = { width: origin.width, height: origin.height, blocks: {} }
      for (const block of element.querySelectorAll<HTMLElement>('[data-block]')) {
        const r = block.getBoundingClientRect()
        next.blocks[block.dataset.block as BlockName] = { left: r.left - origin.left, right: r.right - origin.left, top: r.top - origin.top, bottom: r.bottom - origin.top }
      }
      setBoxes((before) => (JSON.stringify(before) === JSON.stringify(next) ? before : next))
    }
    read()
    const observer = new ResizeObserver(read)
    observer.observe(element)
    for (const block of element.querySelectorAll('[data-block]')) observer.observe(block)
    return () => observer.disconnect()
  }, [])
  return [frame, boxes]
}
