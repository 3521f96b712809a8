import { useMutation } from '@tanstack/react-query'
import type { ChangeView } from '../../../shared/contract/changes.ts'
import type { ReturnChange, SignPeerReview, SignRelease } from '../../../shared/contract/reviews.ts'
import { act } from '../../lib/api-client.ts'

type On = Pick<ChangeView, 'key' | 'revision'>
const at = (change: On) => `/changes/${encodeURIComponent(change.key)}`

/** Signs a peer review on the very content shown. `onSigned` takes up the answer; what it returns is waited for. */
export const useSignPeerReview = (change: On, onSigned: (view: ChangeView) => unknown) =>
  useMutation({ mutationFn: (body: SignPeerReview) => act<ChangeView>({ path: `${at(change)}/sign`, body, ifMatch: change.revision }), onSuccess: onSigned })

/** Signs the release and makes it. */
export const useSignRelease = (change: On, onReleased: (made: { machine: string; version: string }) => unknown) =>
  useMutation({ mutationFn: (body: SignRelease) => act<{ machine: string; version: string }>({ path: `${at(change)}/release`, body, ifMatch: change.revision }), onSuccess: onReleased })

export const useReturnChange = (change: On, onReturned: (view: ChangeView) => unknown) =>
  useMutation({ mutationFn: (body: ReturnChange) => act<ChangeView>({ path: `${at(change)}/return`, body, ifMatch: change.revision }), onSuccess: onReturned })
