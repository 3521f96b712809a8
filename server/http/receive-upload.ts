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
}

export interface Upload {
  /** as the sender calls it; for people to read, never a path */
  name: string
  file: ReceivedFile
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
function storageIn(files: FileStore, limit: number, begun: (receiving: Promise<ReceivedFile>) => void, done: (file: ReceivedFile) => void): StorageEngine {
  return {
    _handleFile(_request, file, finish) {
      const receiving = files.receive(file.stream, limit)
      begun(receiving)
      receiving.then(
        (received) => {
          done(received)
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
  let receiving: Promise<ReceivedFile> | undefined
  const read = multer({
    storage: storageIn(files, spec.limit, (begun) => void (receiving = begun), (file) => void (received = file)),
    limits: { fileSize: spec.limit, files: 1, fields: 0, parts: 1, headerPairs: 40 },
    defParamCharset: 'utf8',
  }).single(spec.field)
  try {
    await new Promise<void>((done, fail) => read(req, res, (error: unknown) => (error ? fail(error as Error) : done())))
    if (!received || !req.file) throw new DomainError('invalid-request', `The form holds no file in the field "${spec.field}". Nothing was kept.`)
    if (received.bytes === 0) throw new DomainError('invalid-request', 'The file is empty. Nothing was kept.')
    return { name: req.file.originalname.replaceAll(/[\u0000-\u001f\u007f\u2028\u2029\\/]/g, '_').slice(0, 120), file: received }
  } catch (error) {
    await received?.discard()
    // The store gave up (a full disk) and left the stream; the form's parser tells of the left stream only.
    const cause = (error as Error).name === 'AbortError' ? await receiving?.then(() => error, (failure: unknown) => failure) : error
    throw asDomainError(cause ?? error, spec)
  }
}
