import type { ComparedJoints, ComparedRegister } from '../../../../shared/contract/comparisons.ts'
import { Bytes } from '../../../components/ui/bytes.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'

const bytesOf = (hex: string) => hex.split(' ').map((pair) => parseInt(pair, 16))

/** What differs of joints by register: address, what it holds, and the bytes of both. */
export function GroupRegisters({ group }: { group: ComparedJoints }) {
  const rows = [...group.registers.map((r) => ({ ...r, joint: '' })), ...ownRows(group)]
  return (
    <>
      {group.problems.map((p) => (
        <p key={p} className="text-13 text-plum">
          {p} Its registers can’t be shown.
        </p>
      ))}
      {rows.length === 0 ? (
        group.problems.length === 0 && <p className="text-13 text-ink-2">Every byte of the images is the same.</p>
      ) : (
        <div className="overflow-x-auto" tabIndex={0} role="region" aria-label={`registers of ${group.joints.map((j) => j.name).join(', ')}`}>
          <table className="table table-dense" aria-label={`registers that differ of ${group.joints.map((j) => j.name).join(', ')}`}>
            <thead>
              <tr>
                <th scope="col">Register</th>
                <th scope="col">Holds</th>
                <th scope="col">Encoding</th>
                <th scope="col">A</th>
                <th scope="col">B</th>
              </tr>
            </thead>
            <tbody>
              {rows.map((r) => (
                <tr key={`${r.address} ${r.bytes} ${r.joint}`}>
                  <td>
                    <HexAddress address={r.address} />
                  </td>
                  <td>
                    {r.what}
                    {r.joint && <span className="text-13 text-ink-2"> of {r.joint}</span>}
                  </td>
                  <td className="num text-13 text-ink-2">{encodings(r)}</td>
                  <td>{r.a === null ? <None /> : <Bytes className="whitespace-nowrap" bytes={bytesOf(r.a)} />}</td>
                  <td>{r.b === null ? <None /> : <Bytes className="whitespace-nowrap" bytes={bytesOf(r.b)} before={r.a === null ? undefined : bytesOf(r.a)} />}</td>
                </tr>
              ))}
            </tbody>
          </table>
        </div>
      )}
    </>
  )
}

/** The image's own words; one that every joint has alike, as the release number, is told once. */
function ownRows({ own, joints }: ComparedJoints): ComparedJoints['own'] {
  const rows = new Map<string, ComparedJoints['own'][number] & { of: number }>()
  for (const r of own) {
    const key = `${r.address} ${r.what} ${r.a} ${r.b}`
    const known = rows.get(key)
    if (known) Object.assign(known, { joint: `${known.joint}, ${r.joint}`, of: known.of + 1 })
    else rows.set(key, { ...r, of: 1 })
  }
  return [...rows.values()].map(({ of, ...r }) => ({ ...r, joint: of === joints.length && of > 1 ? 'each' : r.joint }))
}

const encodings = ({ encodingA, encodingB }: ComparedRegister) => (encodingA === encodingB || encodingA === '' ? encodingB : encodingB === '' ? encodingA : `${encodingA}, ${encodingB}`)

const None = () => <span className="text-13 text-ink-2">no such register</span>
