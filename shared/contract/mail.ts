import type { Allowed } from './people.ts'

export interface MailView {
  id: number
  to: string
  person: string | null
  subject: string
  /** single-use links masked outside demo mode */
  text: string
  state: 'queued' | 'sent' | 'failed'
  attempts: number
  createdAt: string
  sentAt: string | null
  lastError: string | null
  may: { retry: Allowed }
}

export interface MailPage {
  mails: MailView[]
  /** id to ask before for the next page; null at the end */
  next: number | null
  total: number
}
