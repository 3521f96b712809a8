import type { SignatureView } from '../../../../shared/contract/changes.ts'
import { FindingMark } from '../../../components/ui/finding-mark.tsx'
import { Time } from '../../../components/ui/time.tsx'

/** A signature as it appears everywhere: meaning, printed name, time, statement. A void one is struck and says so. */
export function SignatureLine({ signature, number }: { signature: SignatureView; number: number | null }) {
  return (
    <div>
      <div className="flex items-baseline gap-3">
        <span className="w-[18px] text-13 text-ink-2">{number}</span>
        <b>{signature.meaning}</b>
        <span className="ml-auto">{signature.void ? <span className="text-13 text-oxide">void</span> : <FindingMark level="pass" size={15}>signed</FindingMark>}</span>
      </div>
      <div className="ml-[30px]">
        <p className={`flex flex-wrap items-baseline justify-between gap-x-3 border-b border-ink text-16 leading-7 font-medium ${signature.void ? 'text-ink-2 line-through' : ''}`}>
          <span>{signature.person}</span>
          <span className="text-13 font-normal">
            <Time at={signature.at} style="long" />
          </span>
        </p>
        <p className="mt-1 text-13 text-ink-2">“{signature.statement}”</p>
      </div>
    </div>
  )
}
