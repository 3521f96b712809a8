import type { ReleaseJointView, ReleaseView } from '../../../../shared/contract/releases.ts'
import { Hash } from '../../../components/ui/hash.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { Table, type Column } from '../../../components/ui/table.tsx'
import { imageHref } from '../take-file.ts'

/** Every joint of the release: where it sits, which revision, which firmware, the image's hash and its files. */
export function ReleaseItems({ release }: { release: ReleaseView }) {
  // Superseded files need a reason, which is asked beside the sheet.
  const may = release.may.download.allowed && !release.needsReason
  const item = new Map(release.items.map((r, i) => [r.joint, i + 1]))
  const columns: Column<ReleaseJointView>[] = [
    { key: 'item', head: 'Item', align: 'end', width: '52px', cell: (r) => <span className="num text-ink-2">{item.get(r.joint)}</span>, sortBy: (r) => item.get(r.joint) ?? 0 },
    { key: 'joint', head: 'Joint', cell: (r) => <b>{r.name}</b>, sortBy: (r) => r.name },
    { key: 'family', head: 'Family', cell: (r) => r.family, className: 'text-ink-2', sortBy: (r) => r.family },
    { key: 'bus', head: 'Bus', cell: (r) => r.bus, sortBy: (r) => r.bus },
    { key: 'address', head: 'Address', cell: (r) => <HexAddress address={r.address} />, sortBy: (r) => r.address },
    { key: 'revision', head: 'Revision', cell: (r) => <span className={`num ${r.isNew ? 'font-medium text-brass' : ''}`}>r{r.revision}{r.isNew && <span className="sr-only"> new</span>}</span>, sortBy: (r) => r.revision },
    { key: 'firmware', head: 'Firmware', cell: (r) => <span className="num">{r.firmware}</span>, sortBy: (r) => r.firmware },
    { key: 'sha', head: 'SHA-256 of the image, first 8 bytes', cell: (r) => <Hash hash={r.imageSha256} bytes={8} /> },
    ...(may
      ? [
          {
            key: 'files',
            head: 'One joint',
            align: 'end' as const,
            className: 'no-print',
            cell: (r: ReleaseJointView) => (
              <span className="inline-flex gap-2">
                {(['bin', 'hex'] as const).map((format) => (
                  <a key={format} className="link num text-13" href={imageHref(release.machine, release.version, r.joint, format)} download aria-label={`download .${format} of ${r.name}`}>
                    .{format}
                  </a>
                ))}
              </span>
            ),
          },
        ]
      : []),
  ]
  return <Table label="joints of the release" dense rows={release.items} columns={columns} rowKey={(r) => r.joint} empty="The release holds no joint." />
}
