import { useQuery } from '@tanstack/react-query'
import { lazy, Suspense, useEffect, useRef } from 'react'
import { Outlet, redirect, ScrollRestoration, useLocation, useNavigate, useNavigation } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { CodeAsked } from '../features/people/components/code-asked.tsx'
import { SignInAgain } from '../features/people/components/sign-in-again.tsx'
import { useSignOut } from '../features/people/mutations.ts'
import { SearchField } from '../features/search/components/search-field.tsx'
import { machinesQuery } from '../features/machines/queries.ts'
import { ProblemPanel } from '../components/problem/problem-panel.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { TopBar } from '../components/ui/top-bar.tsx'
import { Waiting } from '../components/ui/waiting.tsx'
import { ApiProblem } from '../lib/api-client.ts'
import { holds, meQuery, useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'
import { paths } from './paths.ts'
import { useTheme } from '../lib/theme.ts'
import { useTour } from '../lib/tour-state.ts'
import { helpBeside } from './help-key.ts'
import { machineItems, machineOfPath, personItems, placesFor, rolesInWords } from './top-bar-places.ts'

const TourPanel = lazy(() => import('../features/tour/components/tour-panel.tsx'))

/** Whoever is not signed in goes to the sign-in page, and back here after it. */
export async function signedInLoader({ request }: LoaderFunctionArgs) {
  try {
    const me = await queryClient.ensureQueryData(meQuery)
    void queryClient.prefetchQuery(machinesQuery)
    return me
  } catch (error) {
    if (!(error instanceof ApiProblem) || error.code !== 'not-signed-in') throw error
    const { pathname, search } = new URL(request.url)
    throw redirect(paths.signIn(pathname + search))
  }
}

/**
 * Top bar and page. A new page takes the focus, so that keyboard and screen reader begin at its head. Words for screen readers alone are
 * placed absolutely and would widen the page from inside a table that scrolls; the page clips them.
 */
export function SignedInLayout() {
  const me = useMe()
  const { pathname } = useLocation()
  const busy = useNavigation().state === 'loading'
  const machines = useQuery(machinesQuery)
  const signOut = useSignOut()
  const theme = useTheme()
  const main = useRef<HTMLElement>(null)
  const before = useRef(pathname)

  useEffect(() => {
    if (before.current === pathname) return
    before.current = pathname
    main.current?.focus({ preventScroll: true })
  }, [pathname])

  const navigate = useNavigate()
  useEffect(() => {
    const onKey = (event: KeyboardEvent) => {
      if (event.key !== 'F1') return
      event.preventDefault()
      const beside = helpBeside(document.activeElement)
      if (beside) beside.click()
      else void navigate(paths.help())
    }
    document.addEventListener('keydown', onKey)
    return () => document.removeEventListener('keydown', onKey)
  }, [navigate])

  const tour = useTour()
  const machineKey = machineOfPath(pathname)
  const machine = machines.data?.find((m) => m.key === machineKey)
  return (
    <>
      <TopBar
        home={paths.desk()}
        places={placesFor(me)}
        machines={machineItems(machines.data ?? [], machineKey)}
        machine={machine?.name ?? 'Machines'}
        search={(className) => <SearchField className={className} />}
        person={{ name: me.name, roles: rolesInWords(me.roles) }}
        personItems={personItems({ theme, mayKeepPeople: holds(me, 'keep people'), mayKeepMail: holds(me, 'keep mail'), mayKeepBackups: holds(me, 'keep backups'), signOut: () => signOut.mutate() })}
      />
      <main ref={main} id="content" tabIndex={-1} aria-busy={busy} className="wrap relative overflow-x-clip pb-12 outline-none">
        <ProblemPanel className="mt-3" problem={signOut.error} />
        {me.secondFactor.missing && pathname !== paths.account() && (
          <p className="mt-3 border-l-[3px] border-plum bg-plum-wash px-4 py-2 text-13">
            You can sign nothing yet: this workplace asks a second factor of everybody who signs. <TextLink to={paths.account()}>Set one up</TextLink>
          </p>
        )}
        <Suspense fallback={<Waiting className="pt-8" />}>
          <Outlet />
        </Suspense>
      </main>
      {tour.open && (
        <Suspense fallback={null}>
          <TourPanel step={tour.step} />
        </Suspense>
      )}
      <SignInAgain email={me.email} />
      <CodeAsked />
      <ScrollRestoration />
    </>
  )
}
