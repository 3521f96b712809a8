import type { MailView } from '../../../../shared/contract/mail.ts'
import { refusal } from '../../../components/layout/refused.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { KeyValueList } from '../../../components/ui/key-value-list.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { useRetryMail } from '../mutations.ts'
import { MailState } from './mail-table.tsx'

export function MailDialog({ mail, onClose }: { mail: MailView; onClose: () => void }) {
  const retry = useRetryMail()
  return (
    <Dialog
      open
      wide
      onClose={onClose}
      busy={retry.isPending}
      title={mail.subject}
      actions={
        <>
          {mail.state !== 'sent' && mail.state !== 'gathered' && (
            <Button unavailable={refusal(mail.may.retry)} pending={retry.isPending} onClick={() => retry.mutate(mail.id)}>
              Send it now
            </Button>
          )}
          <Button onClick={onClose}>Close</Button>
        </>
      }
    >
      <KeyValueList
        entries={[
          { key: 'to', value: `${mail.person ?? ''} ${mail.to}`.trim() },
          { key: 'queued', value: <Time at={mail.createdAt} style="long" /> },
          { key: 'state', value: <MailState mail={mail} /> },
          ...(mail.lastError ? [{ key: 'last error', value: mail.lastError }] : []),
        ]}
      />
      <pre tabIndex={0} aria-label="text of the mail" className="max-h-[50vh] overflow-auto border border-hairline bg-paper p-3 font-sans text-14 whitespace-pre-wrap">{linked(mail.text)}</pre>
      <ProblemPanel problem={retry.error} />
    </Dialog>
  )
}

/** Addresses of this very program become links. */
function linked(text: string) {
  return text.split(/(https?:\/\/\S+)/).map((piece, i) => {
    const own = i % 2 === 1 && piece.startsWith(`${window.location.origin}/`)
    return own ? <a key={i} className="link" href={piece}>{piece}</a> : piece
  })
}
