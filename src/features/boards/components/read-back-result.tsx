import type { ReadBackResult, RegisterDifference, ValueDifference } from '../../../../shared/contract/boards.ts'
import { valueText } from '../../../components/layout/value-text.ts'
import { Bytes } from '../../../components/ui/bytes.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { VerdictMark } from '../../../components/ui/verdict-mark.tsx'
import { count } from '../../../lib/format.ts'

const bytesOf = (hex: string) => hex.split(' ').map((b) => parseInt(b, 16))

const ownRegister = { checksum: 'Checksum', 'layout-id': 'Layout id', release: 'Release number', parameter: 'Reserved bits' } as const

/** One line that says how a dump compares. */
export function ReadBackVerdict({ result }: { result: ReadBackResult }) {
  return result.verdict === 'equal' ? (
    <VerdictMark verdict="stable">
      equal to r{result.revision}, <span className="num">{result.comparedBytes}</span> of <span className="num">{result.imageBytes}</span> bytes
    </VerdictMark>
  ) : (
    <VerdictMark verdict="unstable">
      {count(result.differences.length, 'register')} {result.differences.length === 1 ? 'differs' : 'differ'} from r{result.revision}
    </VerdictMark>
  )
}

function Value({ value, unit }: { value: ValueDifference['found']; unit: string }) {
  return value === null ? (
    <span className="text-ink-2">no value</span>
  ) : (
    <span className="whitespace-nowrap">
      <span className="num">{valueText(value)}</span>
      {unit && <span className="unit ml-[.22em]">{unit}</span>}
    </span>
  )
}

function Difference({ difference: d }: { difference: RegisterDifference }) {
  const title = d.values.length > 0 ? d.values.map((v) => v.title).join(', ') : ownRegister[d.kind]
  return (
    <li className="grid gap-x-4 border-b border-hairline py-2 last:border-rule sm:grid-cols-[5rem_minmax(0,1fr)_auto]">
      <HexAddress address={d.address} className="text-ink-2" />
      <div className="min-w-0">
        <b className="font-medium">{title}</b>
        {d.values.map((v) => (
          <div key={v.parameter} className="text-13">
            found <Value value={v.found} unit={v.unit} />, expected <Value value={v.expected} unit={v.unit} />
          </div>
        ))}
      </div>
      <div className="text-13 text-ink-2 sm:text-right">
        <div>
          <Bytes bytes={bytesOf(d.found)} before={bytesOf(d.expected)} /> <span className="sr-only">found</span>
        </div>
        <div>
          <Bytes bytes={bytesOf(d.expected)} /> <span className="text-12">expected</span>
        </div>
      </div>
    </li>
  )
}

/** A dump against a release: every register that differs in units and bytes, bytes nothing explains, and what makes no sense. */
export function ReadBackDetails({ result }: { result: ReadBackResult }) {
  return (
    <div className="grid gap-2">
      <ReadBackVerdict result={result} />
      {result.differences.length > 0 && (
        <ul aria-label="registers that differ" className="border-t border-ink">
          {result.differences.map((d) => (
            <Difference key={d.address} difference={d} />
          ))}
        </ul>
      )}
      {result.findings.map((f) => (
        <p key={f} className="text-13 text-plum">
          {f}
        </p>
      ))}
      {result.unexplained.length > 0 && (
        <p className="text-13 text-ink-2">
          Bytes that no register explains:{' '}
          {result.unexplained.map((u, i) => (
            <span key={u.address}>
              {i > 0 && ', '}
              <HexAddress address={u.address} /> <Bytes bytes={bytesOf(u.bytes)} />
            </span>
          ))}
        </p>
      )}
      <p className="text-12 text-ink-2 [overflow-wrap:anywhere]">
        {result.fileName}, SHA-256 <Hash hash={result.sha256} bytes={8} className="!text-12" />
        {result.sequence !== null && (
          <>
            , release register <span className="num">{result.sequence}</span>
          </>
        )}
      </p>
    </div>
  )
}
