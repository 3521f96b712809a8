import { useState } from 'react'
import type { PersonView } from '../../../../shared/contract/people.ts'
import { refusal } from '../../../components/layout/refused.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { ConfirmByName } from '../../../components/ui/confirm-by-name.tsx'
import { usePersonAct } from '../mutations.ts'
import type { PersonAct } from '../mutations.ts'

/** What an administrator does with a person's access. */
export function PersonActs({ person }: { person: PersonView }) {
  const personAct = usePersonAct(person.id)
  const [disabling, setDisabling] = useState(false)
  const [resetting, setResetting] = useState(false)
  const { may } = person
  const pending = (what: PersonAct) => personAct.isPending && personAct.variables === what
  return (
    <>
      <div className="flex flex-wrap gap-2">
        <Button unavailable={refusal(may.reset)} pending={pending('reset')} onClick={() => personAct.mutate('reset')}>
          {person.state === 'invited' ? 'Send the invitation again' : 'Send a reset link'}
        </Button>
        <Button unavailable={refusal(may.resetSecondFactor)} onClick={() => setResetting(true)}>
          Reset the second factor…
        </Button>
        {person.state === 'disabled' ? (
          <Button unavailable={refusal(may.enable)} pending={pending('enable')} onClick={() => personAct.mutate('enable')}>
            Enable
          </Button>
        ) : (
          <Button kind="danger" unavailable={refusal(may.disable)} onClick={() => setDisabling(true)}>
            Disable…
          </Button>
        )}
      </div>
      {personAct.isSuccess && personAct.variables === 'reset' && (
        <p role="status" className="mt-2 text-13 text-verdigris">
          A link was mailed to {person.email ?? person.name}.
        </p>
      )}
      {!disabling && !resetting && <ProblemPanel className="mt-2" problem={personAct.error} />}
      <ConfirmByName
        open={resetting}
        onClose={() => setResetting(false)}
        title={`Reset the second factor of ${person.name}`}
        name={person.name}
        noun="person"
        act="Reset it"
        pending={pending('second-factor/reset')}
        onConfirm={() => personAct.mutate('second-factor/reset', { onSuccess: () => setResetting(false) })}
      >
        <p>For somebody who lost app and recovery codes, after making sure, in person or by voice, that it is them. Their password alone signs them in then, all their sessions end, and they are told by mail. If they sign, another signer has to confirm them.</p>
        <ProblemPanel problem={personAct.error} />
      </ConfirmByName>
      <ConfirmByName
        open={disabling}
        onClose={() => setDisabling(false)}
        title={`Disable ${person.name}`}
        name={person.name}
        noun="person"
        act="Disable"
        pending={pending('disable')}
        onConfirm={() => personAct.mutate('disable', { onSuccess: () => setDisabling(false) })}
      >
        <p>{person.name} can no longer sign in, and all their sessions end. What they did stays under their name. It can be undone.</p>
        <ProblemPanel problem={personAct.error} />
      </ConfirmByName>
    </>
  )
}
