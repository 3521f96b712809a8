import { describe, expect, it } from 'vitest'
import { csvLine } from '../../server/exports/csv-text.ts'
import type { ExportContext } from '../../server/exports/export-context.ts'
import { EXPORT_FORMATS, exportFile, type ExportFormat } from '../../server/exports/export-file.ts'
import type { ParameterSchema, ParameterValues } from '../../shared/registers/parameter-schema.ts'
import { aSchema, firmware } from '../registers/a-schema.ts'

const released: ExportContext = {
  machine: 'Dunlin', joint: 'L1 knee', firmware: { line: 'hinge', version: '2.1.0' },
  status: { kind: 'release', version: '1.7.0', sequence: 7 }, device: 0x33, toolVersion: '0.1.0',
}
const bench: ExportContext = { ...released, status: { kind: 'bench', board: 'H-0288' } }
const file = (format: ExportFormat, schema: ParameterSchema, values: ParameterValues = {}, context = released): { name: string; text: string } => {
  const made = exportFile(format, schema, values, context)
  if (made.kind === 'refused') throw new Error(made.problems[0].message)
  return { name: made.name, text: Buffer.from(made.bytes).toString(format === 'bin' ? 'hex' : 'utf8') }
}
const hinge = firmware('hinge-2.1.0')
const capstan = firmware('capstan-1.3.0')

describe('every format', () => {
  it.each(EXPORT_FORMATS)('%s: the same set gives the same bytes, a new schema object included', (format) => {
    const first = file(format, hinge, { velocityGain: 5.6, currentLimit: 2.8 })
    expect(file(format, firmware('hinge-2.1.0'), { currentLimit: 2.8, velocityGain: 5.6 })).toEqual(first)
    expect(first.text.length).toBeGreaterThan(100)
  })

  it('refuses what cannot be encoded, and a form it does not know', () => {
    expect(exportFile('bin', hinge, { velocityGain: 200 }, released)).toMatchObject({ kind: 'refused', problems: [{ code: 'out-of-range' }] })
    expect(() => exportFile('bin', hinge, {}, released, 99)).toThrow(/form 99/)
  })

  it('marks a bench image in its name, header and record, and holds release 0', () => {
    for (const format of EXPORT_FORMATS) expect(file(format, hinge, {}, bench).name).toMatch(/^UNRELEASED-bench-only_Dunlin_L1-knee_H-0288\./)
    expect(file('h', hinge, {}, bench).text).toContain('UNRELEASED – bench only, board H-0288')
    const header = file('srec', hinge, {}, bench).text.split('\n')[0]
    expect(Buffer.from(header.slice(8, -2), 'hex').toString()).toBe('UNRELEASED - bench only, H-0288')
    expect(file('json', hinge, {}, bench).text).toContain('"bench": "UNRELEASED – bench only"')
    expect(file('bin', hinge, {}, bench).text.slice(24, 32)).toBe('00000000')
    expect(file('bin', hinge).text.slice(24, 32)).toBe('07000000')
  })
})

describe('write list', () => {
  const rows = (schema: ParameterSchema): string[][] => file('write-list', schema).text.trim().split('\n').map((line) => line.split(','))

  it('goes by class: limits, gains, the rest, checksum, mode, address; by address within each', () => {
    const [head, ...body] = rows(hinge)
    expect(head).toEqual(['device', 'register', 'bytes'])
    expect(body.map((row) => row[1].slice(2)).join(' ')).toBe(
      '18 1A 1C 1E 38 3A 3C 10 14 24 28 30 34 00 06 08 0A 0C 2C 3E 40 42 44 46 48 49 4A 4C 7C 7E 05 04',
    )
    expect(body.every((row) => row[0] === '0x33')).toBe(true)
    expect(body.find((row) => row[1] === '0x24')?.[2]).toBe('33 33 33 00')
  })

  it('writes 16-bit register addresses high byte first, and a shared word with its latest field', () => {
    const body = rows(capstan).slice(1)
    expect(body.slice(-2).map((row) => row[1])).toEqual(['0x010A', '0x0108'])
    expect(body.find((row) => row[1] === '0x0110')?.[2]).toBe('40 20 00 00')
    expect(body.some((row) => row[1] === '0x0180')).toBe(false)
  })
})

describe('HEX and S-record', () => {
  it('leave out gaps and read-only registers', () => {
    expect(file('hex', hinge).text.split('\n')[0]).toBe(':02000000214895')
    expect(file('hex', hinge).text).not.toMatch(/^:..006/m)
  })

  it('write gaps where the map says so, but never the registers of the board', () => {
    const { text } = file('hex', capstan)
    expect(text).toMatch(/^:020000040801F1\n:10F80000/)
    expect(text).toMatch(/^:10F870[0-9A-F]{36}\n:01F88B00FF7D\n/m)
  })

  it('take the shortest records, and count them', () => {
    const tiny = aSchema({ a: { type: 'integer', default: 1, 'x-register': { address: 2, encoding: 'u8' } } }, { length: 3 })
    expect(file('srec', tiny).text).toBe('S0030000FC\nS104000201F8\nS5030001FB\nS9030000FC\n')
    expect(file('hex', tiny).text).toBe(':0100020001FC\n:00000001FF\n')
  })
})

describe('text files', () => {
  const hostile = aSchema(
    {
      'a-b': { type: 'integer', default: 1, title: '=SUM(A1) */ #error "x"\n', description: 'say "hi"\\', 'x-register': { address: 0, encoding: 'i8' } },
      a_b: { type: 'integer', default: -1, 'x-register': { address: 1, encoding: 'i8' } },
      reg: { enum: ['on', 'Off, maybe'], default: 'on', 'x-register': { address: 2, encoding: 'u8', bit: 1, width: 2, values: { on: 1, 'Off, maybe': 2 } } },
    },
    { length: 3 },
  )

  it('keep titles inside C comments and give every name once', () => {
    const { text } = file('h', hostile)
    expect(text).toContain('/* =SUM(A1) * / #error "x" , i8, little endian, rw: 1 */')
    expect(text).toContain('#define HINGE_A_B_RAW 0x01u')
    expect(text).toContain('#define HINGE_A_B_2_RAW 0xFFu')
    expect(text).toContain('#define HINGE_REG_MASK 0x06u')
    expect(text.match(/\*\//g)).toHaveLength(text.match(/\/\*/g)!.length)
  })

  it('keep titles out of a spreadsheet’s formulas and quote what needs it', () => {
    const lines = file('csv', hostile).text.split('\n')
    expect(lines[1]).toContain(`,"'=SUM(A1) */ #error ""x""\n`.trimEnd())
    expect(lines.some((line) => line.includes('"Off, maybe"'))).toBe(false)
    expect(file('csv', hostile, { reg: 'Off, maybe' }).text).toContain('"Off, maybe"')
  })

  it.each<[string, string]>([
    // OWASP, CSV Injection: the characters that begin a formula, and cells that a separator or a quote would open
    ['=1+1', "'=1+1"], ['+1+cmd()', "'+1+cmd()"], ['-2+3', "'-2+3"], ['@SUM(A1)', "'@SUM(A1)"], ['-1-1', "'-1-1"], ['+A1', "'+A1"], ['--1', "'--1"], ['-1.5e', "'-1.5e"], ['-', "'-"],
    ['  =1', "  '=1"], ['\u200b=1', "\u200b'=1"], ['\uff1d1+1', "'\uff1d1+1"], ['a;=1', '"a;\'=1"'], ['a\n=1', '"a\n\'=1"'], ['\tx', '"\'\tx"'], ['\rx', '"\'\rx"'], ['a,=1', '"a,=1"'], ['say "x"', '"say ""x"""'],
    ['-1.5', '-1.5'], ['+3', '+3'], ['-2e-7', '-2e-7'], ['1 - 2', '1 - 2'], ['a-b', 'a-b'], ['', ''],
  ])('write the cell %j as %j', (given, written) => {
    expect(csvLine([given])).toBe(`${written}\n`)
  })

  it('leave numbers as they are', () => {
    expect(csvLine([-1.5, 0, null, 1e-9])).toBe('-1.5,0,,1e-9\n')
  })

  it('record every register with its bytes, value and rounding error', () => {
    const record = JSON.parse(file('json', hinge, { velocityGain: 5.6 }).text) as { registers: Record<string, unknown>[]; image: Record<string, unknown> }
    expect(record.registers.find((r) => r.parameter === 'velocityGain')).toMatchObject({
      address: '0x24', bytes: '9A 99 99 05', typed: 5.6, value: 5.600000023841858, unit: 'A·s/rad',
    })
    expect(String(record.image.sha256)).toMatch(/^[0-9a-f]{64}$/)
  })

  it('describe the map in SystemRDL: a register a word, a field a parameter', () => {
    const { text } = file('systemrdl', hinge)
    expect(text.match(/^ {2}reg \{/gm)).toHaveLength(hinge.words.length)
    expect(text).toContain("} p_velocityGain[31:0] = 32'h333333;")
    expect(text).toContain('} p_velocityGain @0x0024;')
    expect(text).toContain("} p_encoderDirection[4:4] = 1'h0;")
    expect(text).toContain('detent_unit = "A·s/rad";')
    expect(text.match(/\{/g)).toHaveLength(text.match(/\}/g)!.length)
    expect(file('systemrdl', hostile).text).toContain('desc = "say \\"hi\\"\\\\";')
  })
})
