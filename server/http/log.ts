import { pino, type DestinationStream, type Logger } from 'pino'

/** Structured lines on standard output. What opens an account is left out, should a line ever hold a request's headers. */
export const makeLog = (level: string, to: DestinationStream = pino.destination(1)): Logger =>
  pino({ level, timestamp: pino.stdTimeFunctions.isoTime, redact: ['req.headers', 'res.headers', '*.password', '*.secret', '*.code', '*.token'] }, to)

/** A request as a line names it: nothing of its headers and body, and no secret of a single-use link, which is as good as a password. */
export const requestInLog = ({ id, method, url }: { id: unknown; method: string; url: string }) => ({ id, method, url: url.replaceAll(/(\/links\/)[^/?]+/g, '$1…') })
