/** Cells of one line. A quoted cell may hold the delimiter; a doubled quote in it stands for one (RFC 4180). */
export function splitRow(line: string, delimiter: string): string[] {
  if (!line.includes('"')) return line.split(delimiter)
  const cells: string[] = []
  let cell = ''
  let quoted = false
  for (let k = 0; k < line.length; k++) {
    const c = line[k]
    if (quoted) {
      if (c !== '"') cell += c
      else if (line[k + 1] === '"') {
        cell += '"'
        k += 1
      } else quoted = false
    } else if (c === '"' && cell.trim() === '') {
      cell = ''
      quoted = true
    } else if (c === delimiter) {
      cells.push(cell)
      cell = ''
    } else cell += c
  }
  cells.push(cell)
  return cells
}
