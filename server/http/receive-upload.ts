import { createHash } from 'node:crypto'
import { pipeline, Transform, type Readable } from 'node:stream'
import { createGzip } from 'node:zlib'
import type { Request, Response } from 'express'
import multer, { MulterError, type StorageEngine } from 'multer'
import { FileTooLarge, type FileStore, type ReceivedFile } from '../db/file-store.ts'
import { DomainError } from './errors.ts'

/** The one file that a route takes, in a form. */
export interface UploadSpec {
  /** name of the form's field */
  field: string
  /** most bytes it may have */
  limit: number
  /** stored gzipped; hash, length and beginning of what was sent are told beside */
  compress?: true
}

/** What was sent, where its stored form is another. */
export interface Original {
  sha256: string
  bytes: number
  /** its first bytes, to tell what it is */
  head: Buffer
}

export interface Upload {
  /** as the sender calls it; for people to read, never a path */
  name: string
  file: ReceivedFile
  /** only where it is stored compressed */
  original: Original | null
}

const headBytes = 64 * 1024

/** Gzips a stream and looks at what goes in. Level 1: a bench log shrinks to a fourth, at the speed of a local network. */
function compressed(source: Readable): { stream: Readable; original: () => Original } {
  const hash = createHash('sha256')
  const head: Buffer[] = []
  let bytes = 0
  const look = new Transform({
    transform(chunk: Buffer, _encoding, pass) {
      if (bytes < headBytes) head.push(chunk.subarray(0, headBytes - bytes))
      hash.update(chunk)
      bytes += chunk.length
      pass(null, chunk)
    },
  })
  const gzip = createGzip({ level: 1 })
  // what fails on the way reaches whoever reads the end
  pipeline(source, look, gzip, () => {})
  return { stream: gzip, original: () => ({ sha256: hash.digest('hex'), bytes, head: Buffer.concat(head) }) }
}

const wordsFor: Partial<Record<MulterError['code'], string>> = {
  LIMIT_FILE_COUNT: 'the form holds more than one file',
  LIMIT_PART_COUNT: 'the form holds more than one file',
  LIMIT_FIELD_COUNT: 'the form holds other fields beside the file',
  LIMIT_UNEXPECTED_FILE: 'the file stands in another field than expected',
}

function asDomainError(error: unknown, { limit, field }: UploadSpec): Error {
  const tooLarge = error instanceof FileTooLarge || (error instanceof MulterError && error.code === 'LIMIT_FILE_SIZE')
  if (tooLarge) return new DomainError('body-too-large', `The file is larger than the ${limit} bytes that are taken. Nothing was kept; what was there before stays.`, { extra: { limit } })
  if (error instanceof MulterError) return new DomainError('invalid-request', `The upload can't be taken: ${wordsFor[error.code] ?? error.message.toLowerCase()}. Nothing was kept; send one file in the field "${field}".`)
  // the form's parser refuses what is no form, or ends in the middle
  if (error instanceof Error && /boundary|Unexpected end of form|Malformed|Request aborted|Request closed/i.test(error.message)) return new DomainError('invalid-request', 'The upload ended in the middle, or is no form. Nothing was kept; send it again.')
  return error as Error
}

/** Streams a form's file into the store while it arrives: hashed, counted, synced, under no name yet. */
function storageIn(files: FileStore, { limit, compress }: UploadSpec, begun: (receiving: Promise<ReceivedFile>) => void, done: (file: ReceivedFile, original: Original | null) => void): StorageEngine {
  return {
    _handleFile(_request, file, finish) {
      const small = compress ? compressed(file.stream) : null
      // what does not shrink at all may grow by gzip's own few bytes
      const receiving = files.receive(small?.stream ?? file.stream, limit + (small ? 64 * 1024 : 0))
      begun(receiving)
      receiving.then(
        (received) => {
          done(received, small?.original() ?? null)
          finish(null, {})
        },
        finish,
      )
    },
    _removeFile: (_request, _file, finish) => finish(null),
  }
}

/**
 * Receives the one file of a form. Whoever takes it keeps it or lets it be discarded.
 *
 * @throws DomainError wrong-media-type, body-too-large, invalid-request
 */
export async function receiveUpload(req: Request, res: Response, files: FileStore, spec: UploadSpec): Promise<Upload> {
  if (!req.is('multipart/form-data')) throw new DomainError('wrong-media-type', `This takes one file in a form (multipart/form-data, field "${spec.field}"). Nothing was kept.`)
  let received: ReceivedFile | undefined
  let original: Original | null = null
  let receiving: Promise<ReceivedFile> | undefined
  const read = multer({
    storage: storageIn(files, spec, (begun) => void (receiving = begun), (file, sent) => {
      received = file
      original = sent
    }),
    limits: { fileSize: spec.limit, files: 1, fields: 0, parts: 1, headerPairs: 40 },
    defParamCharset: 'utf8',
  }).single(spec.field)
  try {
    await new Promise<void>((done, fail) => read(req, res, (error: unknown) => (error ? fail(error as Error) : done())))
    if (!received || !req.file) throw new DomainError('invalid-request', `The form holds no file in the field "${spec.field}". Nothing was kept.`)
    if ((original as Original | null)?.bytes === 0 || received.bytes === 0) throw new DomainError('invalid-request', 'The file is empty. Nothing was kept.')
    return { name: req.file.originalname.replaceAll(/[\u0000-\u001f\u007f\u2028\u2029\\/]/g, '_').slice(0, 120), file: received, original }
  } catch (error) {
    await received?.discard()
    // The store gave up (a full disk) and left the stream; the form's parser tells of the left stream only.
    const cause = (error as Error).name === 'AbortError' ? await receiving?.then(() => error, (failure: unknown) => failure) : error
    throw asDomainError(cause ?? error, spec)
  }
}
