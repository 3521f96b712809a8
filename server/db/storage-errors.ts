/** An error of SQLite or the file system, however deep the libraries wrapped it. */
function* chain(error: unknown): Generator<{ code?: unknown; message?: unknown }> {
  let at = error
  for (let depth = 0; depth < 6 && typeof at === 'object' && at !== null; depth += 1) {
    yield at as { code?: unknown; message?: unknown }
    const { cause, previous, originalError } = at as Record<string, unknown>
    at = cause ?? previous ?? originalError
  }
}

/** SQLite's result code, such as SQLITE_BUSY; null when the error is not SQLite's. */
export function sqliteCodeOf(error: unknown): string | null {
  for (const { code, message } of chain(error)) {
    if (typeof code === 'string' && code.startsWith('SQLITE_')) return code
    const named = typeof message === 'string' ? /\bSQLITE_[A-Z]+/.exec(message) : null
    if (named) return named[0]
  }
  return null
}

/** The file system's: no space, past a quota, past the largest size allowed. */
const fullCodes = new Set(['SQLITE_FULL', 'ENOSPC', 'EDQUOT', 'EFBIG'])
/** The disk refused to read or write, for another reason or none that is told. */
const failedCodes = new Set(['SQLITE_IOERR', 'EIO', 'EROFS', 'SQLITE_READONLY', 'SQLITE_CORRUPT', 'SQLITE_NOTADB'])

/** Whether an error means that the disk is full, or that it fails; null: neither. */
export function storageTrouble(error: unknown): 'full' | 'failed' | null {
  for (const { code } of chain(error)) {
    if (typeof code !== 'string') continue
    if (fullCodes.has(code)) return 'full'
    if (failedCodes.has(code)) return 'failed'
  }
  const code = sqliteCodeOf(error)
  if (code === null) return null
  return fullCodes.has(code) ? 'full' : failedCodes.has(code) ? 'failed' : null
}
