import { useState } from 'react'
import { useSearchParams } from 'react-router'
import type { Sort } from '../ui/table.tsx'

/**
 * One value of the query; setting it to '' takes it away. The page stays where it is, and going back skips it.
 *
 * The address follows a moment later; what was set is shown at once, so that a field loses nothing while it is typed in.
 */
export function useUrlText(name: string): [string, (value: string) => void] {
  const [search, setSearch] = useSearchParams()
  const inAddress = search.get(name) ?? ''
  const [onItsWay, setOnItsWay] = useState<string | null>(null)
  if (onItsWay === inAddress) setOnItsWay(null)
  const set = (value: string) => {
    setOnItsWay(value)
    setSearch(
      (before) => {
        const next = new URLSearchParams(before)
        if (value === '') next.delete(name)
        else next.set(name, value)
        return next
      },
      { replace: true, preventScrollReset: true },
    )
  }
  return [onItsWay ?? inAddress, set]
}

/** A table's sort in the query: "address", or "-address" from the greatest down. */
export function useUrlSort(name = 'sort'): [Sort | null, (sort: Sort | null) => void] {
  const [text, setText] = useUrlText(name)
  const sort = text === '' ? null : { key: text.replace(/^-/, ''), descending: text.startsWith('-') }
  return [sort, (next) => setText(next === null ? '' : `${next.descending ? '-' : ''}${next.key}`)]
}

/** Whether any of the texts holds every word of the filter. */
export function fits(filter: string, ...texts: (string | number | null | undefined)[]): boolean {
  const all = texts.join(' ').toLowerCase()
  return filter.toLowerCase().split(/\s+/).every((word) => all.includes(word))
}
