import type { ReactNode } from 'react'
import type { BenchCard } from '../../../../shared/contract/boards.ts'
import { Caution } from '../../../components/ui/caution.tsx'
import { Hash } from '../../../components/ui/hash.tsx'
import { Mark } from '../../../components/ui/mark.tsx'
import { ReleaseMark } from '../../../components/ui/release-mark.tsx'
import { formatHex } from '../../../lib/format.ts'
import { CardRows } from './card-rows.tsx'
import { QrCode } from './qr-code.tsx'

/** The bench card: one joint of one release on A5, to lie beside the board while it is flashed. */
export function BenchCardSheet({ card }: { card: BenchCard }) {
  return (
    <article className="sheet mx-auto w-full max-w-[148mm] !rounded-none px-4 py-4 sm:px-6 print:max-w-none print:border-0 print:p-0" aria-label={`bench card of ${card.name}`}>
      <header className="flex items-start gap-3 border-b border-ink pb-3 sm:gap-4 print:pb-1">
        <div className="min-w-0 flex-1">
          <p className="flex items-center gap-2 text-13 text-ink-2">
            <span className="max-sm:hidden"><Mark size={20} /></span>
            <span>
              bench card, {card.machineName} <span className="num">{card.version}</span>
            </span>
          </p>
          <h1 className="mt-1 leading-8">{card.name}</h1>
          <p className="text-13 text-ink-2">{card.family}</p>
          {card.state !== 'current' && <ReleaseMark state={card.state}>{card.state === 'withdrawn' ? 'withdrawn: must not be flashed' : 'superseded'}</ReleaseMark>}
        </div>
        <div className="text-right">
          <div className="num text-28 leading-8 font-medium">{formatHex(card.address)}</div>
          <div className="text-13 text-ink-2">on bus {card.bus}</div>
        </div>
        <QrCode text={card.releaseUrl} className="size-[68px] sm:size-[84px] print:size-[76px]" label={`QR code of ${card.releaseUrl}`} />
      </header>
      <Caution className="mt-3 print:mt-2 print:!py-1 print:!text-[10px] print:!leading-[13px]" />
      <dl className="mt-3 grid grid-cols-2 gap-x-4 gap-y-1 text-13 sm:grid-cols-4 print:mt-2 print:grid-cols-4 print:text-[11px] print:leading-[14px]">
        <Fact name="revision"><span className="num">r{card.revision}</span></Fact>
        <Fact name="firmware"><span className="num">{card.firmware}</span></Fact>
        <Fact name="measured on"><span className="num">{card.calibratedFor ?? 'no board'}</span></Fact>
        <Fact name="recorded here"><span className="num">{card.board?.serial ?? 'no board'}</span></Fact>
      </dl>
      <div className="mt-3 print:mt-1">
        <CardRows rows={card.rows} />
      </div>
      <dl className="mt-3 grid gap-y-1 text-12 print:mt-2 print:text-[10px] print:leading-[13px]">
        <Fact name="SHA-256 of the image"><Hash hash={card.imageSha256} className="!text-12 !text-ink [overflow-wrap:anywhere] print:!text-[9px]" /></Fact>
        <div className="grid grid-cols-2 gap-x-4 sm:grid-cols-4 print:grid-cols-4">
          {card.checksum && <Fact name={card.checksum.algorithm}><span className="num">0x{card.checksum.value}</span> at <span className="num">{formatHex(card.checksum.address)}</span></Fact>}
          {card.layoutId && <Fact name="layout id"><span className="num">0x{card.layoutId}</span></Fact>}
          <Fact name="release number"><span className="num">{card.sequence}</span></Fact>
          <Fact name="image"><span className="num">{card.imageBytes}</span> bytes, first <span className="num">{card.head}</span></Fact>
        </div>
      </dl>
      <div className="mt-8 grid grid-cols-2 gap-x-6 gap-y-8 text-12 text-ink-2 print:mt-6 print:grid-cols-4 print:text-[9px]">
        {['board flashed', 'by, on', 'read back equal', 'first power-on by'].map((line) => (
          <div key={line} className="border-t border-ink pt-1">
            {line}
          </div>
        ))}
      </div>
      <p className="mt-3 text-12 text-ink-2 print:mt-2 print:text-[9px] print:leading-[12px]">A stable model is no proof of a safe machine; local rules, the machine’s risk assessment and qualified people decide.</p>
    </article>
  )
}

function Fact({ name, children }: { name: string; children: ReactNode }) {
  return (
    <div className="min-w-0">
      <dt className="text-12 text-ink-2 print:text-[9px] print:leading-[12px]">{name}</dt>
      <dd>{children}</dd>
    </div>
  )
}
