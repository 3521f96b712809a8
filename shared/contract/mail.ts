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
}
