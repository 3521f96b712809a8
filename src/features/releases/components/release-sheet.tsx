import type { ReactNode } from 'react'
import { paths } from '../../../app/paths.ts'
import type { ReleaseView } from '../../../../shared/contract/releases.ts'
import { Hash } from '../../../components/ui/hash.tsx'
import { Mark } from '../../../components/ui/mark.tsx'
import { ReleaseMark } from '../../../components/ui/release-mark.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { Time } from '../../../components/ui/time.tsx'
import { count } from '../../../lib/format.ts'
import { ReleaseItems } from './release-items.tsx'

export interface ReleaseSheetProps {
  release: ReleaseView
  /** the life of its change */
  rail: ReactNode
}

/** A release as a sheet of the drawing office: what it is, every joint with its revision and image hash, cautions, signatures. Made to be printed. */
export function ReleaseSheet({ release, rail }: ReleaseSheetProps) {
  const fresh = release.items.filter((i) => i.isNew).length
  return (
    <article className="sheet relative !rounded-none p-2 sm:p-[23px]" aria-label={`release sheet of ${release.machineName} ${release.version}`}>
      <Zones />
      <div className="border border-ink">
        <header className="flex flex-wrap items-start gap-x-8 gap-y-3 border-b border-ink px-4 py-4 sm:px-5">
          <div className="min-w-0 flex-1 basis-72">
            <p className="text-13 text-ink-2">release of</p>
            <h1>
              {release.machineName} <span className="num">{release.version}</span>
            </h1>
            {release.state !== 'current' && <ReleaseMark state={release.state} className="mt-1" />}
            <p className="mt-2 max-w-[76ch]">
              Change{' '}
              <TextLink to={paths.changeReview(release.change)} className="num">
                {release.change}
              </TextLink>
              , “{release.title}”. {stepWords(release)} {fresh === release.items.length ? `All ${count(fresh, 'revision')} are new.` : `${count(fresh, 'revision')} ${fresh === 1 ? 'is' : 'are'} new (brass), ${release.items.length - fresh} carried.`}
            </p>
            {release.reason && <p className="mt-2 max-w-[76ch] text-ink-2">{release.reason}</p>}
          </div>
          <div className="w-full md:w-[min(440px,48%)]">{rail}</div>
        </header>
        {release.withdrawal && (
          <section className="border-b border-ink bg-oxide-wash px-5 py-3">
            <ReleaseMark state="withdrawn">withdrawn: must no longer be flashed</ReleaseMark>
            <p className="mt-1">“{release.withdrawal.reason}”</p>
            <p className="text-13 text-ink-2">
              {release.withdrawal.by}, <Time at={release.withdrawal.at} style="long" />
            </p>
          </section>
        )}
        <ReleaseItems release={release} />
        {release.concessions.length > 0 && (
          <section className="border-t border-ink px-5 py-3 text-13">
            <h2 className="text-13">Standing concessions</h2>
            <ul>
              {release.concessions.map((c) => (
                <li key={c.finding}>
                  <span className="text-plum">{c.characteristic}</span>, {c.limit}, {c.until && <>until <Time at={`${c.until}T12:00:00`} style="date" /></>}
                  {c.until && c.count !== null && ', '}
                  {c.count !== null && `for ${count(c.count, 'board')}, ${c.used === 0 ? 'none' : c.used} on record`}: {c.reason}
                  {c.state !== 'holds' && <strong className="font-medium text-oxide"> {c.state === 'expired' ? 'It expired' : 'It is used up'}; the downloads are stopped.</strong>}
                </li>
              ))}
            </ul>
          </section>
        )}
        <div className="grid border-t border-ink md:grid-cols-[minmax(0,3fr)_minmax(0,2fr)_minmax(0,2fr)]">
          <p className="px-5 py-3 text-12 text-ink-2">
            First power-on with the joint free to move or unloaded, current limited, people clear, emergency stop in reach. A stable model is no proof of a safe machine; local rules, the machine’s risk assessment and qualified people decide.
          </p>
          {release.signatures
            .filter((s) => !s.void)
            .map((s) => (
              <div key={`${s.meaning} ${s.person}`} className="border-t border-ink px-3 py-2 md:border-t-0 md:border-l">
                <p className="text-12 text-ink-2">{s.meaning}</p>
                <p className="font-medium">{s.person}</p>
                <p className="text-12 text-ink-2">
                  <Time at={s.at} style="long" />
                </p>
                <p className="text-12 text-ink-2">“{s.statement}”</p>
              </div>
            ))}
        </div>
        <footer className="grid border-t border-ink text-13 md:grid-cols-[minmax(0,1fr)_auto_auto_auto]">
          <div className="min-w-0 px-5 py-2">
            <p className="text-12 text-ink-2">signed content, SHA-256</p>
            <Hash hash={release.contentHash} className="!text-ink [overflow-wrap:anywhere]" />
          </div>
          <div className="border-t border-ink px-3 py-2 md:border-t-0 md:border-l">
            <p className="text-12 text-ink-2">sequence number</p>
            <span className="num">{release.sequence}</span>
          </div>
          <div className="border-t border-ink px-3 py-2 md:border-t-0 md:border-l">
            <p className="text-12 text-ink-2">released</p>
            <Time at={release.releasedAt} style="long" />
          </div>
          <div className="flex items-center gap-3 border-t border-ink px-3 py-2 md:border-t-0 md:border-l">
            <Mark size={26} />
            <div>
              <p className="text-12 text-ink-2">release, sheet</p>
              <span className="num">{release.version}, 1/1</span>
            </div>
          </div>
        </footer>
      </div>
    </article>
  )
}

/** The zones of a drawing sheet, by which people name a place on it. Decorative. */
function Zones() {
  return (
    <div aria-hidden="true" className="hidden text-12 text-ink-2 sm:block">
      <div className="absolute top-0 right-[23px] left-[23px] grid h-[23px] grid-cols-6">
        {[1, 2, 3, 4, 5, 6].map((n) => (
          <span key={n} className="num border-r border-rule text-center leading-[23px] last:border-0">
            {n}
          </span>
        ))}
      </div>
      <div className="absolute top-[23px] bottom-[23px] left-0 grid w-[23px] grid-rows-5">
        {['A', 'B', 'C', 'D', 'E'].map((z) => (
          <span key={z} className="grid place-items-center border-b border-rule last:border-0">
            {z}
          </span>
        ))}
      </div>
    </div>
  )
}

function stepWords(release: ReleaseView): string {
  const step = `${release.step[0].toUpperCase()}${release.step.slice(1)} step`
  return release.step === release.proposedStep ? `${step}.` : `${step}, ${release.proposedStep} proposed: ${release.stepReason.replace(/\.$/, '')}.`
}
