import { use, useEffect, useRef, useState } from 'react'
import type { Value } from '../../../shared/parameters/machine-set.ts'
import type { Edit } from '../../../shared/parameters/edits.ts'
import { same } from '../../../shared/parameters/edits.ts'
import { TriesContext } from './tried-edits.ts'
import { readTyped, shownValue, valueText } from './typed-value.ts'
import type { ValueAt } from './value-cells.ts'

/** The edit that puts a value at its place; null when it stands there already. */
export const editTo = (at: ValueAt, to: Value | undefined): Edit | null => (same(at.own, to) ? null : { pointer: at.pointer, ...(at.own === undefined ? {} : { from: at.own }), ...(to === undefined ? {} : { to }) })

const PAUSE = 600

/**
 * A value while it is typed: checked at every key that leaves it readable, kept as typed until it is settled, by leaving, by Enter, or after a pause when it can be read. What can't be
 * is said in words when it is settled, and the value before is kept.
 */
export function useTypedValue(at: ValueAt, onEdit: (edits: Edit[]) => void) {
  const [typed, setTyped] = useState<string | null>(null)
  const [error, setError] = useState<string | null>(null)
  const timer = useRef<ReturnType<typeof setTimeout>>(undefined)
  const tries = use(TriesContext)
  useEffect(
    () => () => {
      clearTimeout(timer.current)
      tries?.put(at.pointer, null)
    },
    [tries, at.pointer],
  )

  const put = (value: Value) => {
    const edit = editTo(at, value)
    tries?.put(at.pointer, null)
    // What is inherited already needs no value of its own, unless one stands there.
    if (edit && !(at.own === undefined && same(at.value, value))) onEdit([edit])
  }
  const settle = (text: string) => {
    clearTimeout(timer.current)
    tries?.put(at.pointer, null)
    if (text === valueText(at.value)) {
      setTyped(null)
      setError(null)
      return true
    }
    const read = readTyped(at.parameter, text)
    if (read.kind === 'refused') {
      setTyped(text)
      setError(`${read.message.replace(/\.$/, '')}. ${at.value === undefined ? 'Nothing' : shownValue(at.value)} is kept.`)
      return false
    }
    setTyped(null)
    setError(null)
    put(read.value)
    return true
  }
  return {
    text: typed ?? valueText(at.value),
    typing: typed !== null,
    error,
    /** A key typed. */
    type(text: string) {
      setTyped(text)
      setError(null)
      clearTimeout(timer.current)
      const read = readTyped(at.parameter, text)
      tries?.put(at.pointer, read.kind === 'value' ? editTo(at, read.value) : null)
      timer.current = setTimeout(() => {
        if (read.kind === 'value') {
          put(read.value)
          setTyped((now) => (now === text && valueText(read.value) === text ? null : now))
        }
      }, PAUSE)
    },
    settle,
    /** A value from the ruler, at once. */
    move(text: string) {
      const read = readTyped(at.parameter, text)
      setTyped(null)
      setError(null)
      if (read.kind === 'value') put(read.value)
    },
    cancel() {
      clearTimeout(timer.current)
      tries?.put(at.pointer, null)
      setTyped(null)
      setError(null)
    },
  }
}
