import { useMutation } from '@tanstack/react-query'
import { useState } from 'react'
import type { ChangeView } from '../../../../shared/contract/changes.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Caution } from '../../../components/ui/caution.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { formatBytes, formatHex } from '../../../lib/format.ts'
import { takeFile } from '../../../lib/take-file.ts'
import { benchImageHref, fileForms, type FileForm } from '../take-file.ts'

export interface BenchImageDialogProps {
  change: Pick<ChangeView, 'key' | 'set'>
  /** joint chosen when it opens */
  joint?: string
  onClose: () => void
}

/** An image of an unreleased change for one board at one joint, for its authors, marked wherever it goes. */
export function BenchImageDialog({ change, joint: start, onClose }: BenchImageDialogProps) {
  const joints = Object.entries(change.set.joints)
  const [joint, setJoint] = useState(start ?? joints[0]?.[0] ?? '')
  const [board, setBoard] = useState(change.set.joints[joint]?.board ?? '')
  const [format, setFormat] = useState<FileForm['format']>('bin')
  const take = useMutation({ mutationFn: () => takeFile(benchImageHref(change.key, { joint, board: board.trim(), format }), `UNRELEASED-bench-only_${joint}.${format}`) })
  const choose = (key: string) => {
    setJoint(key)
    setBoard(change.set.joints[key]?.board ?? '')
  }
  return (
    <Dialog
      open
      onClose={onClose}
      busy={take.isPending}
      title="Bench image"
      actions={
        <>
          <Button kind="primary" unavailable={board.trim() === '' ? 'Name the board first.' : null} pending={take.isPending} onClick={() => take.mutate()}>
            Take the image
          </Button>
          <Button onClick={onClose}>{take.data ? 'Done' : 'Cancel'}</Button>
        </>
      }
    >
      <p className="border-y border-plum py-2 text-center font-medium text-plum">UNRELEASED – bench only</p>
      <p className="text-13">Nobody has signed these numbers. The image is for one board at one joint; from then on that board counts as holding a bench set, until it is read back equal to a release.</p>
      <Select label="Joint" value={joint} onChange={choose} error={fieldError(take.error, '/joint')} options={joints.map(([key, j]) => ({ value: key, label: `${j.name}, ${change.set.buses[j.bus]?.name ?? j.bus} ${formatHex(j.address)}` }))} />
      <TextField label="Board, serial number" mono width={200} value={board} onChange={setBoard} maxLength={40} spellCheck={false} autoComplete="off" error={fieldError(take.error, '/board')} />
      <Select label="File" width={200} value={format} onChange={setFormat} options={fileForms.map((f) => ({ value: f.format, label: `${f.words}, ${f.ending}` }))} />
      <Caution />
      <div role="status">
        {take.data && (
          <p className="text-13">
            saved <span className="num">{take.data.name}</span>, {formatBytes(take.data.bytes)}; {board.trim()} holds a bench set on record
            <Hash hash={take.data.sha256} className="block !text-12 [overflow-wrap:anywhere]" />
          </p>
        )}
      </div>
      <ProblemPanel problem={take.error} shown={['/joint', '/board']} />
    </Dialog>
  )
}
