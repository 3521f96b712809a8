import { useMemo, useRef, useState } from 'react'
import type { KeyboardEvent } from 'react'
import type { ParameterSchema, Word } from '../../../../shared/registers/parameter-schema.ts'
import { count, formatHex } from '../../../lib/format.ts'
import { addressRows, bytesInRow, wordName } from '../address-rows.ts'
import type { AddressRow, Stretch } from '../address-rows.ts'
import { nextStop, stopsOf } from '../map-walk.ts'

const TINT = { rw: 'bg-verdigris-wash', ro: 'bg-slate-wash', wo: 'bg-plum-wash' } as const
const gap = 'bg-[repeating-linear-gradient(135deg,var(--hairline)_0_1px,transparent_1px_5px)]'
const ACCESS_WORDS = { rw: 'read and written', ro: 'read only', wo: 'written only' } as const
const COLUMNS = 'grid grid-cols-[3rem_repeat(16,minmax(0,1fr))] sm:grid-cols-[4rem_repeat(16,minmax(0,1fr))]'

export interface AddressMapProps {
  schema: Pick<ParameterSchema, 'image' | 'words'>
  /** Name of the parameter whose register stands out. */
  chosen: string
  onChoose: (parameter: string) => void
}

/**
 * The register image to scale, sixteen bytes a row. One stop is in the tab order; arrows, Home and End walk over words and gaps alike, and the
 * line below says what lies under the pointer or the focus. A word with parameters picks its row in the table.
 */
export function AddressMap({ schema, chosen, onChoose }: AddressMapProps) {
  const rows = useMemo(() => addressRows(schema), [schema])
  const stops = useMemo(() => stopsOf(rows), [rows])
  const map = useRef<HTMLDivElement>(null)
  const [focused, setFocused] = useState<number | null>(null)
  const [pointed, setPointed] = useState<number | null>(null)
  const column = useRef(0)
  const start = stops.find((s) => s.address === focused) ?? stops.find((s) => s.parameter !== null && s.parameter === chosen) ?? stops[0]

  const onKeyDown = (event: KeyboardEvent) => {
    const here = Number((event.target as HTMLElement).closest<HTMLElement>('[data-stop]')?.dataset.stop ?? NaN)
    const vertical = event.key === 'ArrowUp' || event.key === 'ArrowDown'
    if (!vertical) column.current = here % bytesInRow
    const next = nextStop(stops, here, event.key, column.current)
    if (next === null) return
    event.preventDefault()
    if (!vertical) column.current = next % bytesInRow
    map.current?.querySelector<HTMLElement>(`[data-stop="${next}"]`)?.focus()
  }

  const cell: Cell = { tabStop: start?.address ?? null, chosen, onChoose, onPoint: setPointed, onFocus: setFocused }
  return (
    <div>
      <div ref={map} role="group" aria-label="register map, sixteen bytes a row; arrow keys walk over it" className="grid gap-px text-12" onKeyDown={onKeyDown} onPointerLeave={() => setPointed(null)} onBlur={() => setFocused(null)}>
        <div aria-hidden="true" className={COLUMNS}>
          <span />
          {Array.from({ length: bytesInRow }, (_, i) => (
            <span key={i} className="num text-center text-ink-2">
              {i.toString(16).toUpperCase()}
            </span>
          ))}
        </div>
        {rows.map((row) => (
          <MapRow key={row.address} row={row} base={schema.image.base} cell={cell} />
        ))}
      </div>
      <Readout schema={schema} address={pointed ?? focused} />
      <Legend image={schema.image} />
    </div>
  )
}

interface Cell {
  /** address of the stop in the tab order */
  tabStop: number | null
  chosen: string
  onChoose: (parameter: string) => void
  onPoint: (address: number) => void
  onFocus: (address: number) => void
}

function MapRow({ row, base, cell }: { row: AddressRow; base: number; cell: Cell }) {
  return (
    <div className={`${COLUMNS} items-stretch`}>
      <span className="num self-center pr-2 text-right text-ink-2">{formatHex(row.address)}</span>
      {row.kind === 'free' ? (
        <Gap address={row.address} bytes={row.bytes} cell={cell} className="col-span-16 h-7">
          <span className="bg-paper px-2">{row.bytes} bytes without a register</span>
        </Gap>
      ) : (
        <>
          {row.address < base && <span style={{ gridColumn: `span ${base - row.address}` }} />}
          {row.stretches.map((s) => (s.word ? <Block key={s.address} stretch={s} word={s.word} cell={cell} /> : <Gap key={s.address} address={s.address} bytes={s.bytes} cell={cell} className="h-9" style={{ gridColumn: `span ${s.bytes}` }} />))}
        </>
      )}
    </div>
  )
}

const walked = 'outline-offset-[-1px] focus-visible:z-10'

function Gap({ address, bytes, cell, className, style, children }: { address: number; bytes: number; cell: Cell; className: string; style?: React.CSSProperties; children?: React.ReactNode }) {
  return (
    <span
      role="img"
      aria-label={`${spanOf(address, bytes)}: no register, ${count(bytes, 'byte')}`}
      data-stop={address}
      tabIndex={address === cell.tabStop ? 0 : -1}
      style={style}
      className={`grid place-items-center border border-hairline text-ink-2 ${gap} ${walked} ${className}`}
      onPointerEnter={() => cell.onPoint(address)}
      onFocus={() => cell.onFocus(address)}
    >
      {children}
    </span>
  )
}

function Block({ stretch, word, cell }: { stretch: Stretch; word: Word; cell: Cell }) {
  const { bytes, continued, continues } = stretch
  const name = wordName(word)
  const own = word.parameters.length === 0
  const isChosen = word.parameters.some((p) => p.name === cell.chosen)
  const shared = {
    style: { gridColumn: `span ${bytes}` },
    className: `grid h-9 min-w-0 items-center border border-rule p-0 text-left text-ink ${walked} ${continued ? 'border-l-0' : ''} ${continues ? 'border-r-0' : ''} ${own ? 'bg-brass-wash' : `hover:border-ink ${TINT[word.access]}`} ${isChosen ? 'z-10 outline-2 outline-brass' : ''}`,
    onPointerEnter: () => cell.onPoint(word.address),
    children: <span className="block truncate px-[3px]">{continued ? '' : name}</span>,
  }
  const press = own ? undefined : () => cell.onChoose(word.parameters[0].name)
  // The part of a word in the next row is the same word: pressed as it is, and no second stop for the keyboard or a screen reader.
  if (continued) return <span aria-hidden="true" {...shared} onClick={press} />
  const stop = { 'data-stop': word.address, tabIndex: word.address === cell.tabStop ? 0 : -1, 'aria-label': saidOf(word), onFocus: () => cell.onFocus(word.address) }
  return own ? <span role="img" {...shared} {...stop} /> : <button type="button" aria-pressed={isChosen} {...shared} {...stop} onClick={press} />
}

const spanOf = (address: number, bytes: number) => (bytes === 1 ? formatHex(address) : `${formatHex(address)} to ${formatHex(address + bytes - 1)}`)

const saidOf = (word: Word) => `${spanOf(word.address, word.bytes)}: ${wordName(word)}, ${word.encoding.name}, ${word.parameters.length === 0 ? "the image's own" : ACCESS_WORDS[word.access]}`

/** What lies at an address, in a line that keeps its place. */
function Readout({ schema, address }: { schema: AddressMapProps['schema']; address: number | null }) {
  const word = address === null ? undefined : schema.words.find((w) => address >= w.address && address < w.address + w.bytes)
  const next = address === null ? undefined : schema.words.find((w) => w.address > address)
  const end = next?.address ?? schema.image.base + schema.image.length
  return (
    <p aria-hidden="true" className="mt-2 min-h-10 text-13 sm:min-h-5">
      {address === null ? (
        <span className="text-ink-2">Point at a register, or walk over the map with the arrow keys.</span>
      ) : word ? (
        <>
          <span className="num">{spanOf(word.address, word.bytes)}</span> <span className="font-medium">{wordName(word)}</span>{' '}
          <span className="text-ink-2">
            <span className="num">{word.encoding.name}</span>, {word.byteOrder === 'little' ? 'low' : 'high'} byte first, {word.parameters.length === 0 ? "the image's own" : ACCESS_WORDS[word.access]}
            {word.parameters.some((p) => p.register?.bit != null) && <>; {word.parameters.map((p) => `${p.title || p.name} bit ${bitsOf(p.register)}`).join(', ')}</>}
            {word.parameters.length === 1 && word.parameters[0].unit && <>, in {word.parameters[0].unit}</>}
            {word.parameters.length === 1 && word.parameters[0].register && scaleOf(word.parameters[0].register)}
          </span>
        </>
      ) : (
        <span className="text-ink-2">
          <span className="num">{spanOf(address, end - address)}</span> no register, {count(end - address, 'byte')} of fill <span className="num">{formatHex(schema.image.fill)}</span>
        </span>
      )}
    </p>
  )
}

type Register = NonNullable<Word['parameters'][number]['register']>

const bitsOf = (register: Register | null) => (register === null || register.bit === null ? '' : register.width === null || register.width === 1 ? String(register.bit) : `${register.bit}–${register.bit + register.width - 1}`)

const scaleOf = (register: Register) => (register.scale === '1' && register.offset === '0' ? '' : `, ${register.scale}·raw${register.offset === '0' ? '' : ` + ${register.offset}`}`)

function Legend({ image }: { image: ParameterSchema['image'] }) {
  const key = (tint: string, words: string) => (
    <span className="inline-flex items-center gap-2">
      <i className={`inline-block size-3 border border-rule ${tint}`} /> {words}
    </span>
  )
  return (
    <p className="mt-2 flex flex-wrap gap-x-5 gap-y-1 text-12 text-ink-2">
      {key(TINT.rw, 'in the image')}
      {key(TINT.ro, 'read only')}
      {key(TINT.wo, 'written only')}
      {key('bg-brass-wash', "the image's own")}
      {key(gap, 'no register')}
      {image.checksum && (
        <span>
          {image.checksum.algorithm} over <span className="num">{formatHex(image.checksum.from)}</span> to <span className="num">{formatHex(image.checksum.to)}</span>
        </span>
      )}
      <span>{image.byteOrder === 'little' ? 'low' : 'high'} byte first, filled with <span className="num">{formatHex(image.fill)}</span></span>
    </p>
  )
}
