import { useState } from 'react'
import type { OwnSecondFactor } from '../../../../shared/contract/second-factor.ts'
import { Button } from '../../../components/ui/button.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { count } from '../../../lib/format.ts'
import { useMakeRecoveryCodes, useRemoveSecondFactor } from '../mutations.ts'
import { RecoveryCodesDialog } from './recovery-codes.tsx'
import { ReenterBothDialog } from './reenter-both.tsx'
import { SetUpSecondFactor } from './set-up-second-factor.tsx'

type Open = { dialog: 'set up' | 'renew' | 'remove' } | { dialog: 'codes'; codes: string[] | null } | null

/** The own second factor on the account page. */
export function SecondFactorSection({ own }: { own: OwnSecondFactor }) {
  const [open, setOpen] = useState<Open>(null)
  const close = () => setOpen(null)
  return (
    <section aria-labelledby="second-factor">
      <SectionHeading id="second-factor" className="mb-3">Second factor</SectionHeading>
      {own.missing && <p className="mb-2 text-13 text-plum">Your signing roles wait until you set one up.</p>}
      {own.since === null ? (
        <>
          <p className="mb-3 max-w-[60ch] text-13 text-ink-2">
            {own.rule === 'optional' ? 'This workplace asks nobody for one; you can set one up.' : 'This workplace asks it of everybody who holds a signing role.'} Codes come from an authenticator app.
          </p>
          <Button kind={own.missing ? 'primary' : 'plain'} onClick={() => setOpen({ dialog: 'set up' })}>
            Set up a second factor…
          </Button>
        </>
      ) : (
        <>
          <p className="text-13">
            Set up on <Time at={own.since} style="long" />; {count(own.recoveryCodesLeft, 'recovery code')} left.
          </p>
          {own.recoveryCodesLeft < 3 && <p className="text-13 text-plum">Make new recovery codes before they run out.</p>}
          <div className="mt-3 flex flex-wrap gap-2">
            <Button onClick={() => setOpen({ dialog: 'renew' })}>New recovery codes…</Button>
            <Button kind="danger" onClick={() => setOpen({ dialog: 'remove' })}>
              Remove it…
            </Button>
          </div>
        </>
      )}
      {open?.dialog === 'set up' && <SetUpSecondFactor onClose={close} onDone={(codes) => setOpen({ dialog: 'codes', codes })} />}
      {open?.dialog === 'renew' && <Renew onClose={close} onDone={(codes) => setOpen({ dialog: 'codes', codes })} />}
      {open?.dialog === 'remove' && <Remove own={own} onClose={close} />}
      {open?.dialog === 'codes' && <RecoveryCodesDialog codes={open.codes} onClose={close} />}
    </section>
  )
}

function Renew({ onClose, onDone }: { onClose: () => void; onDone: (codes: string[] | null) => void }) {
  const renew = useMakeRecoveryCodes()
  return (
    <ReenterBothDialog title="New recovery codes" act="Make new ones" pending={renew.isPending} problem={renew.error} onClose={onClose} onSend={(both) => renew.mutate(both, { onSuccess: ({ recoveryCodes }) => onDone(recoveryCodes) })}>
      <p>The ones you have are no longer good after it.</p>
    </ReenterBothDialog>
  )
}

function Remove({ own, onClose }: { own: OwnSecondFactor; onClose: () => void }) {
  const remove = useRemoveSecondFactor()
  return (
    <ReenterBothDialog danger title="Remove the second factor" act="Remove it" pending={remove.isPending} problem={remove.error} onClose={onClose} onSend={(both) => remove.mutate(both, { onSuccess: onClose })}>
      <p>Your password alone signs you in after it, and your other sessions end.{own.rule !== 'optional' && ' Signing roles wait until you set up another one.'}</p>
    </ReenterBothDialog>
  )
}
