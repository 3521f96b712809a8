/** Form of the exported files. A release names the form it was made with, and its files are made again in that form. */
export const EXPORTER_VERSION = 1

/** Mark that an unreleased image bears in its file name, header and on the screen. */
export const BENCH_MARK = 'UNRELEASED – bench only'

/** What an export needs to know besides the set: names for headers, never values. */
export interface ExportContext {
  readonly machine: string
  readonly joint: string
  readonly firmware: { readonly line: string; readonly version: string }
  /** The release, or for an unreleased change the serial number of the board its bench image is for. */
  readonly status:
    | { readonly kind: 'release'; readonly version: string; readonly sequence: number }
    | { readonly kind: 'bench'; readonly board: string }
    | { readonly kind: 'unreleased' }
  /** Bus address at which the board answers when the write list is sent (seven bit). */
  readonly device: number
  readonly toolVersion: string
}

/** Release number that goes into the image: 0 means unreleased. */
export const releaseNumber = (context: ExportContext): number =>
  context.status.kind === 'release' ? context.status.sequence : 0

/** One line that says what a file holds. */
export function titleLine(context: ExportContext): string {
  const { status, firmware } = context
  const state =
    status.kind === 'release' ? `release ${status.version} (${status.sequence})`
    : status.kind === 'bench' ? `${BENCH_MARK}, board ${status.board}`
    : 'unreleased'
  return oneLine(`${context.machine}, ${context.joint}: ${state}, ${firmware.line} ${firmware.version}`)
}

/** Text without line ends or other control characters. */
export const oneLine = (text: string): string => text.replace(/[\u0000-\u001f\u007f-\u009f\u2028\u2029]+/g, ' ').trim()

/** A name as a part of a file name: letters, digits, point, dash. */
export const fileSlug = (text: string): string =>
  text.normalize('NFKD').replace(/[^A-Za-z0-9.-]+/g, '-').replace(/^[-.]+|[-.]+$/g, '').slice(0, 60) || 'unnamed'

/** File name of an export, without its ending. */
export function fileStem(context: ExportContext): string {
  const { status } = context
  const name = `${fileSlug(context.machine)}_${fileSlug(context.joint)}`
  if (status.kind === 'release') return `${name}_${fileSlug(status.version)}`
  if (status.kind === 'bench') return `UNRELEASED-bench-only_${name}_${fileSlug(status.board)}`
  return `${name}_unreleased`
}

/** Hexadecimal with a fixed number of digits, upper case. */
export const hex = (value: number, digits: number): string => value.toString(16).toUpperCase().padStart(digits, '0')

/** Bytes as two-digit hex with a gap between them. */
export const hexBytes = (bytes: Uint8Array): string => Array.from(bytes, (byte) => hex(byte, 2)).join(' ')
