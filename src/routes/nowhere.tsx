import { PageHead } from '../components/layout/page-head.tsx'
import { EmptyState } from '../components/ui/empty-state.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { paths } from '../app/paths.ts'

export function Component() {
  return (
    <>
      <PageHead title="Nothing here" />
      <EmptyState title="There is no page at this address." action={<LinkButton to={paths.desk()}>To the desk</LinkButton>}>
        Check the address, or begin at the desk.
      </EmptyState>
    </>
  )
}
