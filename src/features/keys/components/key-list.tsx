import type { WorkplaceKeyView } from '../../../../shared/contract/keys.ts'
import { Hash } from '../../../components/ui/hash.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { count } from '../../../lib/format.ts'

/** Address of a key as a file, made here from what was read. */
const fileOf = (key: WorkplaceKeyView) => `data:application/x-pem-file;charset=us-ascii,${encodeURIComponent(key.publicKey)}`

/** Public keys, the one in use first; each with its name, its time and its PEM. */
export function KeyList({ keys }: { keys: readonly WorkplaceKeyView[] }) {
  return (
    <ul>
      {keys.map((key) => (
        <li key={key.keyId} className="grid gap-x-6 gap-y-1 border-b border-hairline py-3 md:grid-cols-[minmax(0,1fr)_auto]">
          <div className="min-w-0">
            <p>
              <span className={key.until === null ? 'font-medium' : 'text-ink-2'}>{key.until === null ? 'in use' : 'replaced'}</span>{' '}
              <span className="text-13 text-ink-2">
                from <Time at={key.from} style="long" />
                {key.until && (
                  <>
                    {' '}
                    to <Time at={key.until} style="long" />
                  </>
                )}
                {key.madeBy ? `, rotated to by ${key.madeBy}` : ', made by Detent'}, {count(key.releases, 'release')}
              </span>
            </p>
            <Hash hash={key.keyId} className="block !text-ink [overflow-wrap:anywhere]" />
          </div>
          <p className="self-center text-13">
            <a className="link" href={fileOf(key)} download={`detent-public-key-${key.keyId.slice(0, 8)}.pem`}>
              public key, .pem<span className="sr-only">, of {key.keyId.slice(0, 8)}</span>
            </a>
          </p>
        </li>
      ))}
    </ul>
  )
}
