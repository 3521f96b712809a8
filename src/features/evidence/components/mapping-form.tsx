import { useId, useState } from 'react'
import { logSignals, unitProblem, type ColumnMapping, type EvidenceView, type LogSignal } from '../../../../shared/contract/evidence.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { ErrorPanel } from '../../../components/ui/error-panel.tsx'
import { Progress } from '../../../components/ui/progress.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { fieldError } from '../../../lib/api-client.ts'
import { useReadLog, useStopReading } from '../mutations.ts'
import { usualUnits } from '../words.ts'

type Chosen = Record<LogSignal, { column: string; unit: string }>

const chosenOf = (mapping: readonly ColumnMapping[]): Chosen =>
  Object.fromEntries(logSignals.map((signal) => {
    const m = mapping.find((x) => x.signal === signal)
    return [signal, { column: m ? String(m.column) : '', unit: m?.unit ?? usualUnits[signal][0] }]
  })) as Chosen

const mappingOf = (chosen: Chosen): ColumnMapping[] => logSignals.flatMap((signal) => (chosen[signal].column === '' ? [] : [{ signal, column: Number(chosen[signal].column), unit: chosen[signal].unit.trim() }]))

/** Which column is which, and in what unit; then the log is read, with what is done and a way to stop. */
export function MappingForm({ log }: { log: EvidenceView }) {
  const [chosen, setChosen] = useState(() => chosenOf(log.mapping))
  const read = useReadLog(log.machine, log.number)
  const stop = useStopReading(log.machine, log.number)
  const units = useId()
  const mapping = mappingOf(chosen)
  const set = (signal: LogSignal, part: Partial<Chosen[LogSignal]>) => setChosen((c) => ({ ...c, [signal]: { ...c[signal], ...part } }))
  const { columns, notes } = log.layout
  const { progress } = log
  const missing = (['time', 'current'] as const).filter((s) => chosen[s].column === '')
  if (progress.state === 'running')
    return (
      <section aria-label="reading the log">
        <SectionHeading>Reading</SectionHeading>
        <div className="mt-3 max-w-[560px]">
          <Progress label={`Reading ${log.name}`} done={progress.done} total={progress.total} noun="bytes" onStop={() => stop.mutate()} />
        </div>
        <ProblemPanel className="mt-2" problem={stop.error} />
      </section>
    )
  const problemAt = (k: number, field: 'unit' | 'column') => fieldError(read.error, `/mapping/${k}/${field}`) ?? progress.errors.find((e) => e.pointer === `/mapping/${k}/${field}`)?.detail ?? null
  return (
    <section aria-labelledby="columns">
      <SectionHeading id="columns" aux={log.mappingFrom === null ? undefined : `as chosen for log ${log.mappingFrom} of this machine`}>
        Which column is which
      </SectionHeading>
      {notes.length > 0 && <ul className="mt-1 text-13 text-ink-2">{notes.map((n) => <li key={n}>{n}</li>)}</ul>}
      {progress.state === 'failed' && <ErrorPanel className="mt-3" title="The log could not be read" happened={progress.problem} kept="The file is kept as it was sent." whatToDo="Choose other columns or units and read it again, or remove it." />}
      {progress.state === 'stopped' && <p role="status" className="mt-3 text-13">Stopped. The file is kept as it was sent; read it again when you like.</p>}
      <form
        className="mt-3 grid gap-y-2"
        onSubmit={(e) => {
          e.preventDefault()
          read.mutate(mapping)
        }}
      >
        {logSignals.map((signal) => {
          const { column, unit } = chosen[signal]
          const k = mapping.findIndex((m) => m.signal === signal)
          const wrong = column === '' ? null : unitProblem(signal, unit)
          return (
            <fieldset key={signal} className="grid grid-cols-[minmax(0,1fr)_100px] items-start gap-x-3 gap-y-1 border-b border-hairline pb-2 sm:grid-cols-[100px_minmax(0,280px)_120px_minmax(0,1fr)]">
              <legend className="sr-only">{signal}</legend>
              <span className="col-span-2 pt-1 font-medium sm:col-span-1" aria-hidden="true">
                {signal}
              </span>
              <Select
                label={`column of ${signal}`}
                hideLabel
                value={column === '' ? 'none' : column}
                onChange={(v) => {
                  const stated = v === 'none' ? '' : columns[Number(v)].unit
                  set(signal, { column: v === 'none' ? '' : v, ...(stated && unitProblem(signal, stated) === null ? { unit: stated } : {}) })
                }}
                options={[{ value: 'none', label: '–' }, ...columns.map((c, i) => ({ value: String(i), label: c.unit ? `${c.name} (${c.unit})` : c.name }))]}
                error={problemAt(k, 'column')}
              />
              <TextField label={`unit of ${signal}`} hideLabel mono list={`${units}-${signal}`} value={unit} disabled={column === ''} onChange={(u) => set(signal, { unit: u })} error={wrong ?? problemAt(k, 'unit')} />
              <datalist id={`${units}-${signal}`}>{usualUnits[signal].map((u) => <option key={u} value={u} />)}</datalist>
              <span className="num col-span-2 truncate pt-1 text-13 text-ink-2 sm:col-span-1">{column === '' ? '' : columns[Number(column)]?.samples.join('  ')}</span>
            </fieldset>
          )
        })}
        <ProblemPanel problem={read.error} shown={mapping.flatMap((_, k) => [`/mapping/${k}/unit`, `/mapping/${k}/column`])} />
        <div className="mt-1 flex flex-wrap items-center gap-3">
          <Button kind="primary" type="submit" pending={read.isPending} unavailable={!log.may.read.allowed ? log.may.read.why : missing.length > 0 ? `Say which column is the ${missing.join(' and the ')}.` : null}>
            Read it
          </Button>
          <span className="text-12 text-ink-2">output-referred: angle and speed behind the gear. Rows are used as they stand, nothing is resampled.</span>
        </div>
      </form>
    </section>
  )
}
