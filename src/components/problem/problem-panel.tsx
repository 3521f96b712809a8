import type { ReactNode } from 'react'
import { ErrorPanel } from '../ui/error-panel.tsx'
import { ApiProblem } from '../../lib/api-client.ts'

export interface ProblemPanelProps {
  /** Nothing is drawn for null. */
  problem: unknown
  /** Pointers whose problems stand beside their fields already. */
  shown?: readonly string[]
  onRetry?: () => void
  className?: string
  children?: ReactNode
}

/** A refusal in full, in the server's words; a failure of our own says so. */
export function ProblemPanel({ problem, shown = [], onRetry, className, children }: ProblemPanelProps) {
  if (!problem) return null
  if (!(problem instanceof ApiProblem))
    return <ErrorPanel className={className} title="This part of the page failed" happened={problem instanceof Error ? problem.message : String(problem)} whatToDo="What you typed elsewhere is kept. Load the page again; tell an administrator if it stays." onRetry={onRetry} />
  const rest = problem.errors.filter((e) => !shown.includes(e.pointer))
  return <ErrorPanel className={className} title={problem.title} happened={problem.detail} whatToDo={children} pointers={rest.map((e) => ({ pointer: e.pointer, message: e.detail }))} onRetry={onRetry} />
}
