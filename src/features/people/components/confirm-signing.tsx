import type { PersonView } from '../../../../shared/contract/people.ts'
import { refusal } from '../../../components/layout/refused.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { usePersonAct } from '../mutations.ts'

/** Shown while a person's right to sign waits for a second signer. */
export function ConfirmSigning({ person }: { person: PersonView }) {
  const confirm = usePersonAct(person.id)
  const unconfirmed = person.roles.filter((r) => !r.confirmed).map((r) => r.role)
  if (unconfirmed.length === 0 && person.signingHold === null) return null
  return (
    <section aria-labelledby="signing" className="mb-6 border-l-[3px] border-plum bg-plum-wash px-4 py-3">
      <h2 id="signing">{person.name} cannot sign yet</h2>
      <p className="mt-1 max-w-[70ch] text-13">
        {person.signingHold ? `Held since: ${person.signingHold}. ` : `Granted, but not confirmed: ${[...new Set(unconfirmed)].join(', ')}. `}
        Another person who signs confirms it, after making sure, in person or by voice, that {person.name} holds this account.
      </p>
      <div className="mt-2">
        <Button kind="primary" unavailable={refusal(person.may.confirmSigning)} pending={confirm.isPending} onClick={() => confirm.mutate('confirm-signing')}>
          Confirm that {person.name} signs
        </Button>
      </div>
      {!person.may.confirmSigning.allowed && <p className="help">{person.may.confirmSigning.why}</p>}
      <ProblemPanel className="mt-2" problem={confirm.error} />
    </section>
  )
}
