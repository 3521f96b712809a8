import { useQuery } from '@tanstack/react-query'
import { useEffect, useState } from 'react'
import type { Find, FindGroup } from '../../../shared/contract/search.ts'
import { searchQuery } from './queries.ts'

/** Asked a moment after the last key, so that a word typed quickly is asked once. */
const pauseMs = 140

export interface Finds {
  groups: readonly FindGroup[]
  /** the finds of all groups in the order shown, which the arrows walk */
  flat: readonly Find[]
  /** said in words: how many, none, or that it failed */
  told: string
}

/** What fits the words typed; null before anything was asked for. */
export function useFinds(typed: string): Finds | null {
  const text = typed.trim()
  const [asked, setAsked] = useState('')
  useEffect(() => {
    const timer = setTimeout(() => setAsked(text), text === '' ? 0 : pauseMs)
    return () => clearTimeout(timer)
  }, [text])
  const search = useQuery(searchQuery(asked))
  if (text === '' || asked === '') return null
  if (search.isError) return { groups: [], flat: [], told: search.error.message }
  if (search.data === undefined) return null
  const { groups } = search.data
  const flat = groups.flatMap((g) => g.finds)
  return { groups, flat, told: flat.length === 0 ? 'Nothing is called like that.' : `${flat.length} ${flat.length === 1 ? 'find' : 'finds'}` }
}
