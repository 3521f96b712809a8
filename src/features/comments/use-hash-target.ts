import { useEffect } from 'react'
import { useLocation } from 'react-router'

/** Leads to the comment that the address names, as mails and the desk do, once the comments are there. */
export function useHashTarget(ready: boolean) {
  const { hash } = useLocation()
  useEffect(() => {
    if (ready && hash.startsWith('#comment-')) document.getElementById(hash.slice(1))?.scrollIntoView?.({ block: 'center' })
  }, [ready, hash])
}
