const escaped = (text: string) => text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;').replaceAll("'", '&#39;')

/** What ends a sentence after an address is none of it. */
const address = /https?:\/\/[^\s<>"']*[^\s<>"'.,;:!?)\]]/g

/** Escapes a line; the addresses in it lead somewhere. */
function inline(line: string): string {
  let html = ''
  let at = 0
  for (const found of line.matchAll(address)) {
    html += `${escaped(line.slice(at, found.index))}<a href="${escaped(found[0])}" style="color:#4a5f7a">${escaped(found[0])}</a>`
    at = found.index + found[0].length
  }
  return html + escaped(line.slice(at))
}

/** A paragraph of the text: a list where each line is indented, a rule for "----", else lines as they stand. */
function block(text: string): string {
  const lines = text.split('\n')
  if (lines.length === 1 && /^-{4,}$/.test(lines[0])) return '<hr style="border:0;border-top:1px solid #cfc8b8;margin:20px 0">'
  if (lines.every((l) => /^ {2}\S/.test(l))) return `<ul style="margin:0 0 14px;padding-left:20px">${lines.map((l) => `<li>${inline(l.trim())}</li>`).join('')}</ul>`
  return `<p style="margin:0 0 14px">${lines.map(inline).join('<br>')}</p>`
}

/** The HTML of a letter, from its text: nothing stands in one that does not stand in the other, and whatever people wrote is escaped. No picture, script or outside address. */
export function letterHtml(subject: string, text: string): string {
  const blocks = text.trim().split(/\n{2,}/).map(block).join('\n')
  return [
    '<!doctype html>',
    `<html lang="en"><head><meta charset="utf-8"><title>${escaped(subject)}</title></head>`,
    '<body style="margin:0;background:#f6f2e9;color:#1f1d1a;font:15px/1.5 \'Fira Sans\',Helvetica,Arial,sans-serif">',
    '<div style="max-width:600px;margin:0 auto;padding:28px 24px">',
    `<h1 style="font-size:18px;font-weight:500;margin:0 0 18px;padding-bottom:10px;border-bottom:1px solid #cfc8b8">${escaped(subject)}</h1>`,
    blocks,
    '</div></body></html>',
    '',
  ].join('\n')
}
