import { withQuery } from '../../lib/api-client.ts'
import { releasePath } from './queries.ts'

/** Files of a joint, those a bench uses first. */
export const fileForms = [
  { format: 'bin', words: 'Raw image', ending: '.bin' },
  { format: 'hex', words: 'Intel HEX', ending: '.hex' },
  { format: 'srec', words: 'S-record', ending: '.srec' },
  { format: 'write-list', words: 'Write list', ending: '.csv' },
  { format: 'h', words: 'C header', ending: '.h' },
  { format: 'csv', words: 'Register table', ending: '.csv' },
  { format: 'json', words: 'Record', ending: '.json' },
  { format: 'systemrdl', words: 'SystemRDL', ending: '.rdl' },
] as const
export type FileForm = (typeof fileForms)[number]

/** Address of a joint's file; a superseded release is not fetched without a reason. */
export const imageHref = (machine: string, version: string, joint: string, format: FileForm['format'], reason?: string) =>
  withQuery(`/api${releasePath(machine, version)}/joints/${encodeURIComponent(joint)}/image.${format}`, { reason })

export const kitHref = (machine: string, version: string, reason?: string) => withQuery(`/api${releasePath(machine, version)}/kit.zip`, { reason })

/** Address of an image of an unreleased change, for one board at one joint. */
export const benchImageHref = (change: string, wish: { joint: string; board: string; format: FileForm['format'] }) => withQuery(`/api/changes/${encodeURIComponent(change)}/bench-image`, wish)
