import { useState } from 'react'
import { Button } from '../../../components/ui/button.tsx'
import { Checkbox } from '../../../components/ui/checkbox.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'

/** The one time that recovery codes are shown. */
export function RecoveryCodesDialog({ codes, onClose }: { codes: readonly string[] | null; onClose: () => void }) {
  const [kept, setKept] = useState(codes === null)
  const [copied, setCopied] = useState(false)
  return (
    <Dialog
      open
      busy
      onClose={onClose}
      title="Recovery codes"
      actions={
        <>
          <Button kind="primary" unavailable={kept ? null : 'Keep them first.'} onClick={onClose}>
            Done
          </Button>
          {codes && (
            <Button onClick={() => void navigator.clipboard.writeText(codes.join('\n')).then(() => setCopied(true))}>
              {copied ? 'Copied' : 'Copy them'}
            </Button>
          )}
        </>
      }
    >
      {codes === null ? (
        <p>It is done, and the codes were shown then. If you do not have them, make new ones.</p>
      ) : (
        <>
          <p className="text-13">Each signs you in once when your app is not at hand. Shown this once; only their hashes are kept. Write them down and put them where your phone is not.</p>
          <ol aria-label="recovery codes" className="num grid gap-x-6 gap-y-1 rounded-[3px] border border-ink bg-brass-wash px-3 py-2 text-12 select-all">
            {codes.map((code) => (
              <li key={code} className="whitespace-nowrap">{code}</li>
            ))}
          </ol>
          <Checkbox label="I have kept them" checked={kept} onChange={setKept} />
        </>
      )}
    </Dialog>
  )
}
