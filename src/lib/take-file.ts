import { ApiProblem, problemOf } from './api-client.ts'

export interface TakenFile {
  name: string
  bytes: number
  /** of the bytes that arrived, computed here */
  sha256: string
}

const nameOf = (response: Response, otherwise: string) => {
  const header = response.headers.get('Content-Disposition') ?? ''
  const encoded = /filename\*=UTF-8''([^;]+)/i.exec(header)?.[1]
  return encoded ? decodeURIComponent(encoded) : (/filename="([^"]+)"/.exec(header)?.[1] ?? otherwise)
}

const hexOf = (buffer: ArrayBuffer) => Array.from(new Uint8Array(buffer), (b) => b.toString(16).padStart(2, '0')).join('')

/**
 * Fetches a file, proves its bytes against the hash the server states, and hands it to the browser to save.
 *
 * @throws ApiProblem  the server's refusal; `unexpected` when the bytes that arrived have another hash, and then nothing is saved
 */
export async function takeFile(href: string, otherwise: string): Promise<TakenFile> {
  const response = await fetch(href, { credentials: 'same-origin' }).catch(() => null)
  if (!response) throw new ApiProblem({ code: 'network', status: 0, title: 'No answer', detail: 'Detent did not answer; nothing was downloaded. Check the network and try again.' })
  if (!response.ok) throw await problemOf(response)
  const bytes = new Uint8Array(await response.arrayBuffer())
  const sha256 = hexOf(await crypto.subtle.digest('SHA-256', bytes))
  const stated = response.headers.get('X-Detent-SHA256')
  if (stated !== null && stated.toLowerCase() !== sha256)
    throw new ApiProblem({ code: 'unexpected', status: 0, title: 'The bytes arrived altered', detail: `The file's SHA-256 is ${sha256}, but the server states ${stated}. Nothing was saved; don't flash it. Try again, and tell an administrator if it stays.` })
  const name = nameOf(response, otherwise)
  const url = URL.createObjectURL(new Blob([bytes], { type: 'application/octet-stream' }))
  const link = document.createElement('a')
  link.href = url
  link.download = name
  link.click()
  setTimeout(() => URL.revokeObjectURL(url), 10_000)
  return { name, bytes: bytes.byteLength, sha256 }
}
