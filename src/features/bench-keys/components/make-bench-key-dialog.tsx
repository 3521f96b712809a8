import { useState } from 'react'
import { longestBenchKeyDays, type BenchKeys, type MadeBenchKey } from '../../../../shared/contract/bench-keys.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Checkbox } from '../../../components/ui/checkbox.tsx'
import { Dialog } from '../../../components/ui/dialog.tsx'
import { PasswordField } from '../../../components/ui/password-field.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { count } from '../../../lib/format.ts'
import { useMakeBenchKey } from '../mutations.ts'
import { CurlExamples } from './curl-examples.tsx'

const lifetimes = [7, 30, 90, 180, longestBenchKeyDays]

export function MakeBenchKeyDialog({ machines, onClose }: { machines: BenchKeys['machines']; onClose: () => void }) {
  const make = useMakeBenchKey()
  const [name, setName] = useState('')
  const [chosen, setChosen] = useState<readonly string[]>(machines.length === 1 ? [machines[0].key] : [])
  const [days, setDays] = useState('90')
  const [password, setPassword] = useState('')
  if (make.data) return <Made answer={make.data} onClose={onClose} />
  const missing = name.trim() === '' ? 'Give it a name first.' : chosen.length === 0 ? 'Choose a machine first.' : password === '' ? 'Write your password first.' : null
  return (
    <Dialog
      open
      onClose={onClose}
      title="Make a bench key"
      busy={make.isPending}
      actions={
        <>
          <Button kind="primary" pending={make.isPending} unavailable={missing} onClick={() => make.mutate({ name: name.trim(), machines: [...chosen], days: Number(days), password })}>
            Make the key
          </Button>
          <Button onClick={onClose}>Not now</Button>
        </>
      }
    >
      <p className="text-13">For a script on a bench computer. It reads machines, releases, boards and firmware, and records flashes in your name; nothing else.</p>
      <TextField label="Name" value={name} onChange={setName} maxLength={80} error={fieldError(make.error, '/name')} help="where it is used, such as “bench two”" />
      <fieldset>
        <legend className="label">Machines</legend>
        <div className="grid gap-1">
          {machines.map((m) => (
            <Checkbox key={m.key} label={m.name} checked={chosen.includes(m.key)} onChange={(on) => setChosen(on ? [...chosen, m.key] : chosen.filter((k) => k !== m.key))} error={fieldError(make.error, `/machines/${chosen.indexOf(m.key)}`)} />
          ))}
        </div>
      </fieldset>
      <Select label="Holds for" value={days} onChange={setDays} options={lifetimes.map((d) => ({ value: String(d), label: count(d, 'day') }))} />
      <PasswordField label="Your password" purpose="present" value={password} onChange={setPassword} error={fieldError(make.error, '/password')} />
      <ProblemPanel problem={make.error} shown={['/name', '/password', ...chosen.map((_, i) => `/machines/${i}`)]} />
    </Dialog>
  )
}

/** The one time that the key is shown. */
function Made({ answer, onClose }: { answer: MadeBenchKey; onClose: () => void }) {
  const machine = answer.machines.find((m) => answer.made.machines.includes(m.key) && m.joint !== null)
  return (
    <Dialog
      open
      wide
      onClose={onClose}
      busy
      title={`Bench key “${answer.made.name}”`}
      actions={
        <Button kind="primary" onClick={onClose}>
          I have it
        </Button>
      }
    >
      {answer.secret === null ? (
        <p>This key was made already, and its secret was shown then. If it is lost, revoke this key and make another.</p>
      ) : (
        <>
          <p className="text-13">Shown this once; only its hash is kept. Put it where the script reads it, and nowhere else.</p>
          <output className="num block rounded-[3px] border border-ink bg-brass-wash px-3 py-2 text-13 select-all [overflow-wrap:anywhere]" aria-label="the key">
            {answer.secret}
          </output>
          {machine?.joint && machine.currentVersion && (
            <CurlExamples subject={{ origin: window.location.origin, secret: answer.secret, machine: machine.key, version: machine.currentVersion, joint: machine.joint, serial: machine.serial ?? 'H-0001' }} />
          )}
        </>
      )}
    </Dialog>
  )
}
