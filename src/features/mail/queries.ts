import { infiniteQueryOptions, queryOptions } from '@tanstack/react-query'
import type { MailChoicesView, MailPage } from '../../../shared/contract/mail.ts'
import { get, withQuery } from '../../lib/api-client.ts'

/** The mail queue, newest first, page by page. */
export const mailQuery = infiniteQueryOptions({
  queryKey: ['mail'],
  queryFn: ({ pageParam, signal }) => get<MailPage>(withQuery('/mail', { before: pageParam }), { signal }),
  initialPageParam: null as number | null,
  getNextPageParam: (page) => page.next,
})

/** How one's own mails come. */
export const mailChoicesQuery = queryOptions({ queryKey: ['mail', 'own choices'], queryFn: ({ signal }) => get<MailChoicesView>('/me/mail', { signal }) })
