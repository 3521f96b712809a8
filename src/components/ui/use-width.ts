import { useLayoutEffect, useRef, useState } from 'react'
import type { RefObject } from 'react'

/** Width of an element as it is laid out, kept up to date; `initial` where there is no layout (tests, first paint). */
export function useWidth<E extends Element>(initial: number): [RefObject<E | null>, number] {
  const ref = useRef<E>(null)
  const [width, setWidth] = useState(initial)
  useLayoutEffect(() => {
    const element = ref.current
    if (!element || typeof ResizeObserver === 'undefined') return
    const read = (w: number) => {
      if (w > 0) setWidth(Math.round(w))
    }
    read(element.getBoundingClientRect().width)
    const observer = new ResizeObserver(([entry]) => read(entry.contentRect.width))
    observer.observe(element)
    return () => observer.disconnect()
  }, [])
  return [ref, width]
}
