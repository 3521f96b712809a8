import type { ReadingView } from '../../../shared/contract/reviews.ts'
import { count } from '../../lib/format.ts'
import type { Reading } from './use-reading.ts'

/** What a signer has to do first, in words; null when nothing is left. The server asks the same. */
export function beforeSigning(reading: Pick<Reading, 'view' | 'unread' | 'rows' | 'kept'>, openComments: number | null): string | null {
  if (!reading.view || openComments === null || reading.rows.length !== reading.view.rows) return 'What you have read is not known yet.'
  const unread = reading.unread.length
  const parts = [unread > 0 && `mark ${unread === 1 ? 'one more row' : `${count(unread, 'more row')}`} as read`, openComments > 0 && `have ${openComments === 1 ? 'one open comment' : count(openComments, 'open comment')} answered`].filter(Boolean)
  if (parts.length === 0) return reading.kept ? null : 'Your marks are being kept.'
  const words = parts.join(' and ')
  return `First ${words}.`
}

/** "Rafiq Sandoval all 24 rows, Hedda Lindqvist 12". */
export function readWords({ people, rows }: ReadingView): string {
  if (people.length === 0) return `none of ${count(rows, 'row')}`
  return people.map((p, i) => `${p.name} ${p.read === rows ? 'all' : p.read}${i === 0 ? `${p.read === rows ? '' : ' of'} ${count(rows, 'row')}` : ''}`).join(', ')
}
