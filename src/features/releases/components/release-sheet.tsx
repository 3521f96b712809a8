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
    <article className="release-sheet border border-hairline bg-sheet p-2 sm:p-5" aria-label={`release sheet of ${release.machineName} ${release.version}`}>
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
                  <span className="text-plum">{c.characteristic}</span>, {c.limit}, {c.until ? <>until <Time at={`${c.until}T12:00:00`} style="date" /></> : `for ${count(c.count ?? 0, 'board')}`}: {c.reason}
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

function stepWords(release: ReleaseView): string {
  const step = `${release.step[0].toUpperCase()}${release.step.slice(1)} step`
  return release.step === release.proposedStep ? `${step}.` : `${step}, ${release.proposedStep} proposed: ${release.stepReason.replace(/\.$/, '')}.`
}
