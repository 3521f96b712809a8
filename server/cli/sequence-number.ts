import { Usage } from './usage.ts'

/** A release's sequence number as an option gives it; null where it is not given. @throws Usage for anything but digits */
export function sequenceNumber(text: string | undefined): number | null {
  if (text === undefined) return null
  if (!/^\d{1,15}$/.test(text)) throw new Usage(`"${text}" is no sequence number; --release takes a whole number from 0 on.`)
  return Number(text)
}
