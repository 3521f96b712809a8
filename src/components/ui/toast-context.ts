import { createContext, useContext } from 'react'

export interface ToastMessage {
  text: string
  action?: { label: string; onSelect: () => void }
}

export type ShowToast = (message: ToastMessage) => void

export const ToastContext = createContext<ShowToast | null>(null)

/** Says something done, with perhaps a way back. Never the only place of an error: those stand where they belong, in an ErrorPanel. */
export function useToast(): ShowToast {
  const show = useContext(ToastContext)
  if (!show) throw new Error('useToast is used outside ToastHost.')
  return show
}
