import { largestDumpBytes, type Dump } from '../../../shared/contract/boards.ts'
import { ApiProblem } from '../../lib/api-client.ts'
import { formatBytes } from '../../lib/format.ts'

/** Endings of dumps that are read. */
export const dumpEndings = '.bin,.hex,.ihex,.srec,.s19,.s28,.s37,.csv'

const refuse = (detail: string) => new ApiProblem({ code: 'content-invalid', status: 0, title: "The dump can't be read", detail: `${detail} Nothing was recorded.` })

/** A chosen file as it is sent: its name and its bytes in base64. @throws ApiProblem when it is too large or can't be read */
export async function dumpOfFile(file: File): Promise<Dump> {
  if (file.size > largestDumpBytes) throw refuse(`${file.name} has ${formatBytes(file.size)}; a dump has at most ${formatBytes(largestDumpBytes)}.`)
  const buffer = await file.arrayBuffer().catch(() => {
    throw refuse(`${file.name} could not be read from the disk; choose it again.`)
  })
  let text = ''
  const bytes = new Uint8Array(buffer)
  for (let at = 0; at < bytes.length; at += 0x8000) text += String.fromCharCode(...bytes.subarray(at, at + 0x8000))
  return { fileName: file.name, content: btoa(text) }
}
