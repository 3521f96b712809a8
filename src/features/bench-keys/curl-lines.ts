export interface CurlExample {
  /** what it does */
  words: string
  /** lines for a POSIX shell, as they are pasted */
  lines: string
}

export interface CurlSubject {
  /** where Detent is reached, without a slash at the end */
  origin: string
  secret: string
  machine: string
  version: string
  joint: string
  serial: string
}

/** A text inside single quotes of a POSIX shell. */
const quoted = (text: string) => `'${text.replaceAll("'", `'\\''`)}'`

/** What a script on a bench computer does, as lines that work as pasted: base64 and curl are all they need. */
export function curlExamples({ origin, secret, machine, version, joint, serial }: CurlSubject): CurlExample[] {
  const part = encodeURIComponent
  const curl = 'curl -fsS -H "Authorization: Bearer $DETENT_KEY"'
  const at = `${origin}/api/machines/${part(machine)}`
  const flash = { serial, joint, release: version }
  const withDump = JSON.stringify({ ...flash, readBack: { fileName: 'dump.bin', content: '%s' } })
  return [
    { words: 'The key, for the lines below', lines: `export DETENT_KEY=${quoted(secret)}` },
    { words: 'Which board holds what', lines: `${curl} ${quoted(`${at}/boards`)}` },
    { words: 'The bytes for one joint, saved under their own name', lines: `${curl} -OJ ${quoted(`${at}/releases/${part(version)}/joints/${part(joint)}/image.hex?board=${part(serial)}`)}` },
    { words: 'Record a flash', lines: `${curl} -H 'Content-Type: application/json' \\\n  --data ${quoted(JSON.stringify(flash))} \\\n  ${quoted(`${at}/flashes`)}` },
    { words: 'Record a flash with its read-back, dump.bin', lines: `printf ${quoted(withDump)} "$(base64 < dump.bin | tr -d '\\n')" |\n  ${curl} -H 'Content-Type: application/json' \\\n  --data-binary @- ${quoted(`${at}/flashes`)}` },
  ]
}
