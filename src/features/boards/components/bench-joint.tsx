import { useMutation } from '@tanstack/react-query'
import { useState } from 'react'
import type { BenchCard, BoardView, Dump, MachineBoards } from '../../../../shared/contract/boards.ts'
import { paths } from '../../../app/paths.ts'
import { refusal } from '../../../components/layout/refused.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { BoardMark } from '../../../components/ui/board-mark.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Caution } from '../../../components/ui/caution.tsx'
import { ErrorPanel } from '../../../components/ui/error-panel.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { LinkButton } from '../../../components/ui/link-button.tsx'
import { ReleaseMark } from '../../../components/ui/release-mark.tsx'
import { TextField } from '../../../components/ui/text-field.tsx'
import { useMe } from '../../../lib/me.ts'
import { fieldError } from '../../../lib/api-client.ts'
import { formatHex } from '../../../lib/format.ts'
import { dumpOfFile } from '../dump-of-file.ts'
import { useCompareDump, useRecordFlash } from '../mutations.ts'
import { mostPressingFirst } from '../most-pressing.ts'
import { CardRows } from './card-rows.tsx'
import { DumpField } from './dump-field.tsx'
import { ReadBackDetails, ReadBackVerdict } from './read-back-result.tsx'
import { Step } from './step.tsx'
import { TapDrawing } from './tap-drawing.tsx'

export const benchFormats = ['hex', 'bin', 'srec', 'write-list'] as const
export type BenchFormat = (typeof benchFormats)[number]
const formatWords: Record<BenchFormat, string> = { hex: '.hex', bin: '.bin', srec: '.srec', 'write-list': 'write list' }

export interface BenchJointProps {
  card: BenchCard
  boards: MachineBoards
  /** serial number of the board in hand, when another one than recorded was scanned */
  serial: string | null
  /** fetches a file, proves it and hands it to the browser; the name it was saved under */
  takeFile: (format: BenchFormat, serial: string) => Promise<{ name: string; sha256: string }>
}

/** One joint at the bench: the board, the bytes, the read-back, the record. */
export function BenchJoint({ card, boards, serial: given, takeFile }: BenchJointProps) {
  const [serial, setSerial] = useState(given ?? card.board?.serial ?? card.calibratedFor ?? '')
  const [another, setAnother] = useState(serial === '')
  const [dump, setDump] = useState<Dump | null>(null)
  const take = useMutation({ mutationFn: (format: BenchFormat) => takeFile(format, serial.trim()) })
  const compare = useCompareDump(card.machine, card.joint)
  const record = useRecordFlash(card.machine)
  const choose = useMutation({
    mutationFn: async (file: File) => {
      const read = await dumpOfFile(file)
      setDump(read)
      return compare.mutateAsync({ release: card.version, dump: read })
    },
    onMutate: () => setDump(null),
  })
  if (record.data) return <Recorded board={record.data} boards={boards} joint={card.joint} onAgain={() => record.reset()} />

  const inHand = serial.trim()
  const foreign = inHand !== '' && card.calibratedFor !== null && inHand.toLowerCase() !== card.calibratedFor.toLowerCase()
  const notItsOwn = foreign ? `The values of ${card.name} in ${card.version} were measured on ${card.calibratedFor}, not on ${inHand}. Measure them on ${inHand} and release them first.` : inHand === '' ? card.binding : null
  const refused = refusal(card.may.download) ?? notItsOwn
  const result = compare.data
  const withdrawn = card.state === 'withdrawn'
  const act = withdrawn ? 'Record the withdrawn release' : !result ? 'Record without a read-back' : result.verdict === 'equal' ? 'Record the flash' : 'Record that it differs'
  const missing = refusal(card.may.record) ?? (inHand === '' ? 'Write the serial number of the board first.' : null)
  return (
    <div className="pb-24">
      <header className="flex items-start gap-3">
        <div className="min-w-0 flex-1">
          <h1 className="leading-8">{card.name}</h1>
          <p className="text-13 text-ink-2">
            {card.bus} bus, revision <span className="num">r{card.revision}</span>, release <span className="num">{card.version}</span>
          </p>
          {card.state !== 'current' && <ReleaseMark state={card.state} />}
        </div>
        <span className="num text-28 leading-8 font-medium">{formatHex(card.address)}</span>
        <TapDrawing state={card.board?.state ?? 'unknown'} />
      </header>
      <Caution className="mt-2" />
      {card.state === 'withdrawn' && <ErrorPanel className="mt-3" title={`${card.version} is withdrawn`} happened="It must not be flashed, and no board may run with it." whatToDo="If it was flashed all the same, record it: the board is marked, and the release managers are told." />}
      <ol className="mt-3">
        <Step at={inHand === '' ? 'now' : 'done'} title={inHand === '' ? 'Which board?' : <>Board <span className="num">{inHand}</span></>}>
          {another ? (
            <TextField className="mt-1" label="Serial number" hideLabel mono autoFocus={serial === ''} autoComplete="off" spellCheck={false} value={serial} onChange={setSerial} error={fieldError(record.error, '/serial')} onKeyDown={(event) => event.key === 'Enter' && inHand !== '' && setAnother(false)} help="scan it, or write it as it stands on the board" />
          ) : (
            <p className="flex flex-wrap items-center gap-x-3 text-13">
              {card.board && card.board.serial === inHand ? <BoardMark state={card.board.state} size={15} /> : <span className="text-ink-2">{card.board ? `in place of ${card.board.serial}` : 'not on record here yet'}</span>}
              <Button kind="link" small className="!px-0" onClick={() => setAnother(true)}>
                another board
              </Button>
            </p>
          )}
        </Step>
        <Step at={take.data ? 'done' : inHand === '' ? 'later' : 'now'} title="Take the bytes">
          {refused ? (
            <p className="text-13 text-oxide">{refused}</p>
          ) : (
            <>
              <div className="mt-1 flex flex-wrap gap-2">
                {benchFormats.map((format) => (
                  <Button key={format} small pending={take.isPending && take.variables === format} onClick={() => take.mutate(format)} aria-label={`Download ${formatWords[format]} of ${card.name}`}>
                    {formatWords[format]}
                  </Button>
                ))}
              </div>
              <p className="mt-1 text-12 text-ink-2">
                <Hash hash={card.imageSha256} bytes={8} className="block" />
                <span className="num">{card.imageBytes}</span> bytes
                {card.checksum && (
                  <>
                    , {card.checksum.algorithm} <span className="num">0x{card.checksum.value}</span>
                  </>
                )}
                , first <span className="num">{card.head}</span>
              </p>
              <div role="status">
                {take.data && (
                  <p className="text-13 [overflow-wrap:anywhere]">
                    saved <span className="num">{take.data.name}</span>
                  </p>
                )}
              </div>
            </>
          )}
          <ProblemPanel className="mt-1" problem={take.error} />
        </Step>
        <Step at={result ? 'done' : take.data ? 'now' : 'later'} title="Flash, then read back">
          <div className="mt-1">
            <DumpField label="read-back" fileName={dump?.fileName ?? null} pending={choose.isPending} onFile={(file) => choose.mutate(file)} />
          </div>
          <div role="status" className="mt-1 text-13">
            {result && (result.verdict === 'equal' ? <ReadBackVerdict result={result} /> : <ReadBackDetails result={result} />)}
            {result?.equals && (
              <p className="mt-1 text-oxide">
                These are the bytes of <span className="num">{result.equals}</span>, not of <span className="num">{result.release}</span>.
              </p>
            )}
          </div>
          <ProblemPanel className="mt-1" problem={choose.error} />
        </Step>
        <Step at={result ? 'now' : 'later'} last title="Record">
          <p className="text-13 text-ink-2">
            {inHand === '' ? 'The board' : <span className="num">{inHand}</span>} at {card.name} holds <span className="num">{result?.equals ?? card.version}</span>, {!result ? 'not read back' : result.verdict === 'equal' || result.equals ? 'read-back verified' : 'read-back differs'}, by <By />
          </p>
          {result && result.verdict === 'differs' && !result.equals && <p className="text-13 text-oxide">Flash it again and read it back anew, or record it as it is.</p>}
        </Step>
      </ol>
      <details className="mt-1">
        <summary className="text-13 text-ink-2">registers of this joint</summary>
        <div className="mt-2">
          <CardRows rows={card.rows} address={false} />
        </div>
      </details>
      <ProblemPanel className="mt-3" problem={record.error} shown={['/serial']} />
      <footer className="fixed inset-x-0 bottom-0 z-10 border-t border-hairline bg-paper px-[14px] pt-[10px] pb-3 lg:static lg:mt-4 lg:border-0 lg:px-0">
        <div className="flex gap-[10px]">
          <Button kind={withdrawn || result?.verdict === 'differs' ? 'danger' : result ? 'primary' : 'plain'} className="min-h-[44px] flex-1 text-16 lg:flex-none" pending={record.isPending} unavailable={missing} onClick={() => record.mutate({ serial: inHand, joint: card.joint, release: card.version, ...(dump && result ? { readBack: dump } : {}) })}>
            {act}
          </Button>
          <LinkButton className="min-h-[44px]" to={paths.benchCard(card.machine, card.version, card.joint)}>
            Card
          </LinkButton>
        </div>
      </footer>
    </div>
  )
}

const By = () => <>{useMe().name}</>

function Recorded({ board, boards, joint, onAgain }: { board: BoardView; boards: MachineBoards; joint: string; onAgain: () => void }) {
  const left = mostPressingFirst(boards.joints.filter((j) => j.joint !== joint && j.state !== 'current'))
  const next = left[0]
  return (
    <div role="status" className="sheet px-4 py-4">
      <h1 className="text-20">
        {board.joint?.name} is recorded
      </h1>
      <p className="mt-1">
        <span className="num">{board.serial}</span>: {board.why}
      </p>
      <BoardMark state={board.state} className="mt-1" />
      {board.state === 'withdrawn release on board' && <ErrorPanel className="mt-3" title="This board holds a withdrawn release" happened="It is on record, and the release managers were told." whatToDo="Keep its joint from running until it is flashed with a release that stands, and read back." />}
      <div className="mt-4 grid gap-2 sm:flex">
        {next && (
          <LinkButton kind="primary" className="min-h-[44px]" to={paths.bench(board.machine, { joint: next.joint, withdrawn: boards.current === null })}>
            Next: {next.name}
          </LinkButton>
        )}
        <LinkButton className="min-h-[44px]" to={paths.bench(board.machine, { withdrawn: boards.current === null })}>
          All joints
        </LinkButton>
        <LinkButton className="min-h-[44px]" to={paths.board(board.serial)}>
          Its history
        </LinkButton>
        <Button className="min-h-[44px]" onClick={onAgain}>
          Once more
        </Button>
      </div>
    </div>
  )
}
