import type { CheckView } from '../../../../shared/contract/checks.ts'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { Progress } from '../../../components/ui/progress.tsx'
import { useResumeCheck, useStopCheck } from '../mutations.ts'
import { useCheckStream } from '../use-check-stream.ts'

/** How far the walk over the tolerances has come, with the way to stop it or to go on; nothing once the check is complete. */
export function ToleranceWalk({ change, check, className = '' }: { change: string; check: Pick<CheckView, 'complete' | 'progress'>; className?: string }) {
  useCheckStream(change, !check.complete)
  const stop = useStopCheck(change)
  const resume = useResumeCheck(change)
  if (check.complete) return null
  const { done, total, state, problem } = check.progress
  return (
    <div className={className}>
      {state === 'running' || state === 'done' ? (
        <Progress label="over the tolerances" done={done} total={Math.max(total, 1)} noun="points" onStop={() => stop.mutate()} />
      ) : (
        <div className="flex flex-wrap items-center gap-3 text-13">
          <p className={state === 'failed' ? 'text-oxide' : 'text-plum'}>{state === 'failed' ? problem : 'The walk over the tolerances was stopped; what is done is kept.'}</p>
          <Button small pending={resume.isPending} onClick={() => resume.mutate()}>
            Go on with it
          </Button>
        </div>
      )}
      <ProblemPanel problem={stop.error ?? resume.error} />
    </div>
  )
}
