import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { MailView } from '../../../shared/contract/mail.ts'
import { act } from '../../lib/api-client.ts'

export function useRetryMail() {
  const client = useQueryClient()
  return useMutation({ mutationFn: (mail: number) => act<MailView>({ path: `/mail/${mail}/retry`, body: {} }), onSuccess: () => Promise.all([['mail'], ['ledger']].map((queryKey) => client.invalidateQueries({ queryKey }))) })
}
