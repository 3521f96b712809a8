import type { MachineBoards } from '../../../../shared/contract/boards.ts'
import { BoardMark } from '../../../components/ui/board-mark.tsx'
import { HexAddress } from '../../../components/ui/hex-address.tsx'
import { Mark } from '../../../components/ui/mark.tsx'
import { Num } from '../../../components/ui/num.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { count } from '../../../lib/format.ts'
import { notReadBack } from '../known-words.ts'
import { BoardCounts } from './board-counts.tsx'
import { BoardTable } from './board-table.tsx'

/** A machine's boards against its release, as a sheet to walk round the machine with. */
export function AuditSheet({ boards, now }: { boards: MachineBoards; now: number }) {
  const unproven = notReadBack(boards)
  const empty = boards.joints.filter((j) => j.board === null)
  return (
    <article className="sheet !rounded-none px-4 py-4 sm:px-6 print:border-0 print:p-0" aria-label={`audit sheet of ${boards.machineName}`}>
      <header className="flex flex-wrap items-start gap-x-8 gap-y-2 border-b border-ink pb-3">
        <div className="min-w-0 flex-1 basis-64">
          <p className="flex items-center gap-2 text-13 text-ink-2">
            <Mark size={20} /> physical audit
          </p>
          <h1>
            {boards.machineName} {boards.current && <span className="num">{boards.current.version}</span>}
          </h1>
          <p className="text-13 text-ink-2">
            {boards.current ? <>released <Time at={boards.current.releasedAt} style="date" />, sequence number <span className="num">{boards.current.sequence}</span></> : boards.newest ? <><span className="num">{boards.newest.version}</span> is withdrawn; there is no current release</> : 'nothing is released yet'}; as on record <Time at={now} style="long" />
          </p>
        </div>
        <BoardCounts counts={boards.counts} />
      </header>
      <p className="py-3">
        {unproven.length === 0 ? 'Every board on record was read back.' : <>Not read back: {count(unproven.length, 'board')}, known by what was recorded alone.</>}
        {empty.length > 0 && <> No board is on record at {empty.map((j) => j.name).join(', ')}.</>}
      </p>
      <div className="overflow-x-auto">
        <table className="w-full border-collapse text-13">
          <thead>
            <tr className="border-y border-ink text-left text-ink-2">
              {['Joint', 'Address', 'Board on record', 'Measured on', 'Holds', 'State', 'Read back', 'Seen'].map((head) => (
                <th key={head} className="py-1 pr-3 font-medium whitespace-nowrap">
                  {head}
                </th>
              ))}
            </tr>
          </thead>
          <tbody>
            {boards.joints.map((j) => (
              <tr key={j.joint} className="border-b border-hairline">
                <td className="py-[6px] pr-3 font-medium whitespace-nowrap">{j.name}</td>
                <td className="pr-3 whitespace-nowrap">
                  <HexAddress address={j.address} /> <span className="text-ink-2">{j.bus}</span>
                </td>
                <td className="num pr-3">{j.board?.serial ?? <Num value={null} />}</td>
                <td className={`num pr-3 ${j.board && j.calibratedFor && j.calibratedFor.toLowerCase() !== j.board.serial.toLowerCase() ? 'text-oxide' : 'text-ink-2'}`}>{j.calibratedFor ?? <Num value={null} />}</td>
                <td className="num pr-3">{j.board?.release ?? <Num value={null} />}</td>
                <td className="pr-3 whitespace-nowrap">
                  <BoardMark state={j.state} size={15} />
                </td>
                <td className="pr-3 whitespace-nowrap">{j.readBack ? <>{j.readBack.verdict === 'equal' ? 'equal' : <span className="text-oxide">differs</span>}, <Time at={j.readBack.at} />, {j.readBack.by}</> : j.board?.release ? <span className="text-plum">not read back</span> : <Num value={null} />}</td>
                <td className="w-[4.5rem]">
                  <span aria-hidden="true" className="inline-block h-[18px] w-full border-b border-rule" />
                </td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      {boards.off.length > 0 && (
        <section className="mt-5">
          <h2 className="text-16">Boards at no joint</h2>
          <BoardTable boards={boards.off} without={['machine', 'joint', 'address']} label="boards at no joint" empty="" />
        </section>
      )}
      <div className="mt-8 grid grid-cols-2 gap-x-6 gap-y-8 text-12 text-ink-2 sm:grid-cols-3">
        {['audited by', 'on', 'signature'].map((line) => (
          <div key={line} className="border-t border-ink pt-1">
            {line}
          </div>
        ))}
      </div>
    </article>
  )
}
