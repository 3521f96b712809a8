import type { AskCopy } from '../../db/read-copy.ts'

/** Every column that names a stored file. */
const naming: readonly { table: string; column: string }[] = [
  { table: 'firmware_version', column: 'image_sha256' },
  { table: 'evidence', column: 'stored_sha256' },
  { table: 'evidence', column: 'columns_sha256' },
]

/** SHA-256 of every stored file that the database names, sorted; columns that an older database has not name nothing. */
export async function referencedFiles(ask: AskCopy): Promise<string[]> {
  const named = new Set<string>()
  for (const { table, column } of naming) {
    const columns = await ask<{ name: string }>(`select name from pragma_table_info('${table}')`)
    if (!columns.some((c) => c.name === column)) continue
    for (const row of await ask<{ sha256: string }>(`select distinct ${column} as sha256 from ${table} where ${column} is not null`)) named.add(row.sha256)
  }
  return [...named].sort()
}
