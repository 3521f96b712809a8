import { applyEdits as applyTextEdits, modify, parseTree, type Node, type ParseError, printParseErrorCode } from 'jsonc-parser'
import { keepDecimal } from '../registers/rational.ts'
import type { Edit } from './edits.ts'
import type { MachineSet } from './machine-set.ts'
import { fromPointer, toPointer } from './paths.ts'

/** A problem of a text, where a person finds it: lines and columns count from 1. */
export interface TextProblem {
  line: number
  column: number
  pointer: string
  message: string
}

export type ReadText = { ok: true; document: unknown; pointerOffsets: Map<string, number> } | { ok: false; problems: TextProblem[] }

const layout = { tabSize: 2, insertSpaces: true, eol: '\n' }
const deepest = 20

/** Line and column, from 1, of an offset in a text. */
export function placeOf(text: string, offset: number): { line: number; column: number } {
  const before = text.slice(0, offset)
  const line = before.split('\n').length
  return { line, column: offset - before.lastIndexOf('\n') }
}

/**
 * Reads JSON with comments into a plain document.
 *
 * Nothing is guessed: a member given twice, a trailing comma, or text after the end is a problem. A number that a double does not
 * hold is kept as its decimal text. The address of a joint or device may be written in hexadecimal, as "0x33".
 */
export function readText(text: string): ReadText {
  const errors: ParseError[] = []
  const root = parseTree(text, errors, { allowTrailingComma: false, disallowComments: false })
  const problems: TextProblem[] = errors.map((e) => ({ ...placeOf(text, e.offset), pointer: '', message: `the text breaks here: ${printParseErrorCode(e.error).replace(/([a-z])([A-Z])/g, '$1 $2').toLowerCase()}` }))
  if (!root || problems.length > 0) return { ok: false, problems: problems.length > 0 ? problems : [{ line: 1, column: 1, pointer: '', message: 'the text is empty' }] }
  const pointerOffsets = new Map<string, number>()
  const walk = (node: Node, path: (string | number)[]): unknown => {
    const pointer = toPointer(path)
    pointerOffsets.set(pointer, node.offset)
    const problem = (message: string, at = node) => problems.push({ ...placeOf(text, at.offset), pointer, message })
    if (path.length > deepest) {
      problem(`nested deeper than ${deepest} levels`)
      return null
    }
    if (node.type === 'array') return (node.children ?? []).map((child, i) => walk(child, [...path, i]))
    if (node.type === 'number') return keepDecimal(text.slice(node.offset, node.offset + node.length))
    if (node.type !== 'object') return node.value as unknown
    const members: [string, unknown][] = []
    const seen = new Set<string>()
    for (const property of node.children ?? []) {
      const [keyNode, valueNode] = property.children ?? []
      const key = String(keyNode?.value)
      if (seen.has(key)) problem(`"${key}" is given twice`, keyNode)
      if (key === '__proto__') problem('"__proto__" is no name', keyNode)
      seen.add(key)
      if (valueNode) members.push([key, walk(valueNode, [...path, key])])
    }
    return Object.fromEntries(members)
  }
  const document = walk(root, [])
  return problems.length > 0 ? { ok: false, problems } : { ok: true, document, pointerOffsets }
}

const isAddress = (path: readonly string[]) => path.length >= 3 && path.at(-1) === 'address' && (path[0] === 'joints' || path[0] === 'buses')

const hex = (address: number) => `0x${address.toString(16).toUpperCase().padStart(2, '0')}`

/** The document with its hexadecimal addresses read as numbers; anything else is left for the schema to refuse. */
export function withNumericAddresses(document: unknown): unknown {
  const walk = (value: unknown, path: string[]): unknown => {
    if (typeof value === 'string' && isAddress(path) && /^0x[0-9a-f]{1,2}$/i.test(value)) return Number.parseInt(value, 16)
    if (Array.isArray(value)) return value.map((v, i) => walk(v, [...path, String(i)]))
    if (typeof value === 'object' && value !== null) return Object.fromEntries(Object.entries(value).map(([k, v]) => [k, walk(v, [...path, k])]))
    return value
  }
  return walk(document, [])
}

const withHexAddresses = (value: unknown, path: string[] = []): unknown => {
  if (typeof value === 'number' && isAddress(path)) return hex(value)
  if (Array.isArray(value)) return value.map((v, i) => withHexAddresses(v, [...path, String(i)]))
  if (typeof value === 'object' && value !== null) return Object.fromEntries(Object.entries(value).map(([k, v]) => [k, withHexAddresses(v, [...path, k])]))
  return value
}

/** A set as the text view first shows it: one member a line, small quantities on one line. */
export function printSet(set: MachineSet): string {
  const text = JSON.stringify(withHexAddresses(set), null, 2)
  return `${text.replace(/\{\n\s+"value": ([^\n]+),\n\s+"low": ([^\n]+),\n\s+"high": ([^\n]+)\n\s+\}/g, '{ "value": $1, "low": $2, "high": $3 }')}\n`
}

/** The text with edits applied in place; comments and layout elsewhere stay as they are. */
export function editText(text: string, edits: readonly Edit[]): string {
  return edits.reduce((t, e) => {
    const path = fromPointer(e.pointer)
    return applyTextEdits(t, modify(t, path, withHexAddresses(e.to, path), { formattingOptions: layout }))
  }, text)
}
