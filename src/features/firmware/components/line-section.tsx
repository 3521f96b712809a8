import { useState } from 'react'
import type { FirmwareLineView, FirmwareVersionSummary, FirmwareVersionView } from '../../../../shared/contract/firmware.ts'
import { paths } from '../../../app/paths.ts'
import { refusal } from '../../../components/layout/refused.ts'
import { Button } from '../../../components/ui/button.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Table } from '../../../components/ui/table.tsx'
import type { Column } from '../../../components/ui/table.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { formatBytes } from '../../../lib/format.ts'
import { LineDialog } from './line-dialog.tsx'
import { DraftVersionDialog } from './draft-version-dialog.tsx'
import { VersionState } from './version-state.tsx'

const columns: Column<FirmwareVersionSummary>[] = [
  { key: 'version', head: 'Version', cell: (v) => <span className="num">{v.version}</span> },
  { key: 'state', head: 'State', cell: (v) => <VersionState state={v.state} /> },
  { key: 'parameters', head: 'Parameters', align: 'end', className: 'num', cell: (v) => v.parameters },
  { key: 'image', head: 'Image', align: 'end', className: 'num', cell: (v) => formatBytes(v.imageBytes) },
  { key: 'author', head: 'Uploaded by', className: 'whitespace-nowrap', cell: (v) => v.uploadedBy },
  { key: 'published', head: 'Published', className: 'whitespace-nowrap', cell: (v) => v.publishedAt && <>{v.publishedBy} <span className="text-13 text-ink-2"><Time at={v.publishedAt} style="date" /></span></> },
  { key: 'hash', head: 'Schema', align: 'end', cell: (v) => <Hash hash={v.schemaHash} bytes={4} /> },
]

/** One firmware line and its versions, newest first. */
export function LineSection({ line, onDrafted }: { line: FirmwareLineView; onDrafted: (version: FirmwareVersionView) => void }) {
  const [dialog, setDialog] = useState<'describe' | 'draft' | null>(null)
  const close = () => setDialog(null)
  return (
    <section aria-labelledby={`line-${line.key}`} className="mb-8">
      <SectionHeading
        id={`line-${line.key}`}
        aux={<span className="num">{line.key}</span>}
        actions={
          <>
            {line.may.describe.allowed && (
              <Button small onClick={() => setDialog('describe')}>
                Describe…
              </Button>
            )}
            <Button small unavailable={refusal(line.may.draftVersion)} onClick={() => setDialog('draft')}>
              Draft a version…
            </Button>
          </>
        }
      >
        {line.name}
      </SectionHeading>
      <p className="mb-1 text-13 text-ink-2">{line.description}</p>
      <Table label={`versions of ${line.name}`} rows={line.versions} columns={columns} rowKey={(v) => v.version} rowTo={(v) => paths.firmwareVersion(line.key, v.version)} empty="No version is drafted yet." />
      {dialog === 'describe' && <LineDialog line={line} onClose={close} />}
      {dialog === 'draft' && <DraftVersionDialog line={line} onClose={close} onDrafted={onDrafted} />}
    </section>
  )
}
