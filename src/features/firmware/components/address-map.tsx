import type { ParameterSchema, Word } from '../../../../shared/registers/parameter-schema.ts'
import { formatHex } from '../../../lib/format.ts'
import { addressRows, bytesInRow, wordName } from '../address-rows.ts'
import type { Stretch } from '../address-rows.ts'

const TINT = { rw: 'bg-verdigris-wash', ro: 'bg-slate-wash', wo: 'bg-plum-wash' } as const
const gap = 'bg-[repeating-linear-gradient(135deg,var(--hairline)_0_1px,transparent_1px_5px)]'
const ACCESS_WORDS = { rw: 'read and written', ro: 'read only', wo: 'written only' } as const

export interface AddressMapProps {
  schema: Pick<ParameterSchema, 'image' | 'words'>
  /** Name of the parameter whose register stands out. */
  chosen: string
  onChoose: (parameter: string) => void
}

/** The register image to scale, sixteen bytes a row. A word with parameters is a button that picks its row in the table. */
export function AddressMap({ schema, chosen, onChoose }: AddressMapProps) {
  return (
    <div>
      <div role="group" aria-label="register map, sixteen bytes a row" className="grid gap-px text-12">
        <div aria-hidden="true" className="grid grid-cols-[3rem_repeat(16,minmax(0,1fr))] sm:grid-cols-[4rem_repeat(16,minmax(0,1fr))]">
          <span />
          {Array.from({ length: bytesInRow }, (_, i) => (
            <span key={i} className="num text-center text-ink-2">
              {i.toString(16).toUpperCase()}
            </span>
          ))}
        </div>
        {addressRows(schema).map((row) => (
          <div key={row.address} className="grid grid-cols-[3rem_repeat(16,minmax(0,1fr))] items-stretch sm:grid-cols-[4rem_repeat(16,minmax(0,1fr))]">
            <span className="num self-center pr-2 text-right text-ink-2">{formatHex(row.address)}</span>
            {row.kind === 'free' ? (
              <span className={`col-span-16 grid h-7 place-items-center border border-hairline text-ink-2 ${gap}`}>
                <span className="bg-paper px-2">{row.bytes} bytes without a register</span>
              </span>
            ) : (
              <>
                {row.address < schema.image.base && <span style={{ gridColumn: `span ${schema.image.base - row.address}` }} />}
                {row.stretches.map((s) => (
                  <Block key={s.address} stretch={s} chosen={s.word?.parameters.some((p) => p.name === chosen) ?? false} onChoose={onChoose} />
                ))}
              </>
            )}
          </div>
        ))}
      </div>
      <Legend image={schema.image} />
    </div>
  )
}

function Block({ stretch, chosen, onChoose }: { stretch: Stretch; chosen: boolean; onChoose: (parameter: string) => void }) {
  const { word, bytes, continued, continues } = stretch
  const style = { gridColumn: `span ${bytes}` }
  const edges = `${continued ? 'border-l-0' : ''} ${continues ? 'border-r-0' : ''}`
  if (!word) return <span style={style} className={`h-9 border border-hairline ${gap}`} title={`${bytes} free`} />
  const name = wordName(word)
  const said = `${spanOf(word)}: ${name}, ${word.encoding.name}, ${ACCESS_WORDS[word.access]}`
  const inside = <span className="block truncate px-[3px]">{continued ? '' : name}</span>
  if (word.parameters.length === 0)
    return (
      <span style={style} title={said} className={`grid h-9 items-center border border-rule bg-brass-wash ${edges}`}>
        {inside}
      </span>
    )
  return (
    <button
      type="button"
      style={style}
      title={said}
      aria-label={said}
      aria-pressed={chosen}
      tabIndex={continued ? -1 : undefined}
      onClick={() => onChoose(word.parameters[0].name)}
      className={`grid h-9 min-w-0 items-center border border-rule p-0 text-left text-ink hover:border-ink ${edges} ${TINT[word.access]} ${chosen ? 'z-10 outline-2 outline-brass' : ''}`}
    >
      {inside}
    </button>
  )
}

const spanOf = ({ address, bytes }: Word) => (bytes === 1 ? formatHex(address) : `${formatHex(address)} to ${formatHex(address + bytes - 1)}`)

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
