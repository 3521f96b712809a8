import { createContext } from 'react'
import type { Present } from '../../../shared/contract/presence.ts'

/** Who else has the change open, for parts of the page that are given no properties of their own. */
export const PresentContext = createContext<readonly Present[]>([])
