import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import type { ChangeView } from '../../../../shared/contract/changes.ts'
import type { CheckResult, Verdict } from '../../../../shared/contract/checks.ts'
import type { DiffView } from '../../../../shared/contract/reviews.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { VerdictMark } from '../../../components/ui/verdict-mark.tsx'
import { Waiting } from '../../../components/ui/waiting.tsx'
import { count } from '../../../lib/format.ts'
import { beforeSigning, readWords } from '../before-signing.ts'
import { useReturnChange, useSignPeerReview, useSignRelease } from '../mutations.ts'
import { versionQuery } from '../queries.ts'
import type { Reading } from '../use-reading.ts'
import { ReturnDialog } from './return-dialog.tsx'
import { SignPeerReviewForm } from './sign-peer-review.tsx'
import { SignReleaseForm } from './sign-release.tsx'
import { SignaturesPanel } from './signatures-panel.tsx'

export interface SigningProps {
  change: ChangeView
  diff: DiffView | undefined
  verdict: Verdict | null
  counts: CheckResult['counts'] | null
  reading: Reading
  /** comments that are open; null while they are not known */
  openComments: number | null
  /** the reader's printed name */
  signer: string
  /** takes up the change as an act left it */
  onChange: (view: ChangeView) => unknown
  onReleased: (made: { machine: string; version: string }) => unknown
}

/** Signatures with the form for the one whose turn it is, and the way back. */
export function Signing({ change, diff, verdict, counts, reading, openComments, signer, onChange, onReleased }: SigningProps) {
  const [returning, setReturning] = useState(false)
  const sign = useSignPeerReview(change, onChange)
  const release = useSignRelease(change, onReleased)
  const giveBack = useReturnChange(change, onChange)
  const { signPeerReview, release: mayRelease, return: mayReturn } = change.may
  const version = useQuery({ ...versionQuery(change.key, change.revision), enabled: mayRelease.allowed })
  const hash = change.contentHash
  const back = mayReturn.allowed && <Button onClick={() => setReturning(true)}>Return…</Button>
  const joints = diff?.counts.joints ?? 0
  const blocked = beforeSigning(reading, openComments)
  return (
    <>
      <SignaturesPanel
        change={change}
        signed={[
          ...(diff ? [{ key: 'alters', value: `${count(diff.counts.values, 'value')} on ${count(joints, 'joint')}` }] : []),
          ...(verdict ? [{ key: 'verdict', value: <VerdictMark verdict={verdict} size={15} /> }] : []),
          ...(counts ? [{ key: 'findings', value: [counts.block && `${counts.block} block`, counts['concession needed'] && `${counts['concession needed']} concession needed`, counts.advise && `${counts.advise} advise`, `${counts.pass} pass`].filter(Boolean).join(', ') }] : []),
          ...(reading.view ? [{ key: 'read', value: readWords(reading.view) }] : []),
          ...(openComments === null ? [] : [{ key: 'comments', value: openComments === 0 ? 'none open' : <span className="text-plum">{openComments} open</span> }]),
          { key: 'concessions', value: change.concessions.length === 0 ? 'none' : String(change.concessions.length) },
        ]}
        peerReview={signPeerReview.allowed && hash ? <SignPeerReviewForm onSign={(password) => sign.mutate({ password, contentHash: hash })} pending={sign.isPending} problem={sign.error} blocked={blocked} signer={signer} other={back} /> : null}
        release={
          mayRelease.allowed && hash ? (
            version.data ? (
              <SignReleaseForm machineName={change.machineName} baseVersion={change.baseVersion} proposal={version.data} joints={joints} onSign={(signed) => release.mutate({ ...signed, contentHash: hash })} pending={release.isPending} problem={release.error} blocked={blocked} signer={signer} other={back} />
            ) : version.isError ? (
              <ProblemPanel problem={version.error} onRetry={() => void version.refetch()} />
            ) : (
              <Waiting what="the version proposed" lines={3} />
            )
          ) : null
        }
      />
      {back && !signPeerReview.allowed && !mayRelease.allowed && <div>{back}</div>}
      {returning && <ReturnDialog title={change.title} onReturn={(reason) => giveBack.mutate({ reason }, { onSuccess: () => setReturning(false) })} onClose={() => setReturning(false)} pending={giveBack.isPending} problem={giveBack.error} />}
    </>
  )
}
