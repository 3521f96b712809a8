import { isRouteErrorResponse, useRouteError } from 'react-router'
import { PageHead } from '../components/layout/page-head.tsx'
import { ProblemPanel } from '../components/problem/problem-panel.tsx'
import { Button } from '../components/ui/button.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { ApiProblem } from '../lib/api-client.ts'
import { paths } from './paths.ts'

const nowhere = new ApiProblem({ code: 'not-found', status: 404, title: 'Not found', detail: 'There is no page at this address. Check the address, or begin at the desk.' })

/** A page that could not be shown, inside the frame of the others. */
export function PageError() {
  const error = useRouteError()
  const problem = isRouteErrorResponse(error) && error.status === 404 ? nowhere : error
  const title = problem instanceof ApiProblem && problem.status === 404 ? 'Nothing here' : 'This page could not be shown'
  return (
    <>
      <PageHead title={title} />
      <ProblemPanel problem={problem} />
      <div className="mt-4 flex gap-2">
        <Button onClick={() => window.location.reload()}>Load it again</Button>
        <LinkButton to={paths.desk()}>To the desk</LinkButton>
      </div>
    </>
  )
}

/** The last resort: even the frame failed. */
export function RootError() {
  return (
    <main id="content" className="wrap">
      <PageError />
    </main>
  )
}
