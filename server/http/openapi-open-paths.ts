import type { TSchema } from '@sinclair/typebox'
import { AskReset, SignIn, UseLink } from '../../shared/contract/people.ts'
import { EnterCode } from '../../shared/contract/second-factor.ts'

/** The paths that need no session; they are mounted by hand, so they are told of by hand. A test asks each of them. */
export const openPaths: readonly { method: 'get' | 'post'; path: string; summary: string; body?: TSchema; example?: unknown }[] = [
  { method: 'get', path: '/workplace', summary: 'what the sign-in page needs to know' },
  { method: 'post', path: '/session', summary: 'sign in', body: SignIn, example: { email: 'mirela.castanho@dunlin.example', password: 'a long enough password' } },
  { method: 'post', path: '/session/code', summary: 'enter the code of the second factor', body: EnterCode },
  { method: 'post', path: '/reset', summary: 'ask for a link to set a new password', body: AskReset, example: { email: 'mirela.castanho@dunlin.example' } },
  { method: 'get', path: '/links/:secret', summary: 'what an invitation or reset link is for' },
  { method: 'post', path: '/links/use', summary: 'set a password by a link', body: UseLink },
]
