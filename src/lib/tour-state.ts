import { useSyncExternalStore } from 'react'

/** Where a reader is on the tour. Kept on this computer, so that it can be left and taken up again. */
export interface TourState {
  open: boolean
  /** from 0 */
  step: number
}

const KEY = 'detent-tour'
const listeners = new Set<() => void>()

function stored(): TourState {
  try {
    const read = JSON.parse(localStorage.getItem(KEY) ?? 'null') as Partial<TourState> | null
    return { open: read?.open === true, step: Number.isInteger(read?.step) ? Math.max(0, read!.step!) : 0 }
  } catch {
    // Storage may be closed to the page, or hold something else.
    return { open: false, step: 0 }
  }
}

let current: TourState | null = null
const now = () => (current ??= stored())

function set(next: TourState) {
  current = next
  try {
    localStorage.setItem(KEY, JSON.stringify(next))
  } catch {
    // It holds until the page is closed.
  }
  for (const listener of listeners) listener()
}

/** Opens the tour where it was left. */
export const openTour = () => set({ ...now(), open: true })
export const leaveTour = () => set({ ...now(), open: false })
export const goToStep = (step: number) => set({ open: true, step })
export const endTour = () => set({ open: false, step: 0 })

export const useTour = (): TourState =>
  useSyncExternalStore((listener) => {
    listeners.add(listener)
    return () => void listeners.delete(listener)
  }, now)
