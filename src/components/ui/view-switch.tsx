import { Link, useLocation, useResolvedPath } from 'react-router'
import { PlaceBall } from './place-ball.tsx'

export interface View {
  label: string
  /** Path or ?query of the view. */
  to: string
  current?: boolean
}

export interface ViewSwitchProps {
  /** What is switched: "views of the change". */
  label: string
  views: readonly View[]
  /** Colour the switch stands on, so that the line opens at the notch. */
  over?: string
}

/** Views of one thing as links on a line; the ball lies under the one shown. */
export function ViewSwitch({ label, views, over }: ViewSwitchProps) {
  return (
    <nav aria-label={label} className="views">
      {views.map((view) => (
        <ViewLink key={view.to} view={view} over={over} />
      ))}
    </nav>
  )
}

function ViewLink({ view, over }: { view: View; over?: string }) {
  const target = useResolvedPath(view.to)
  const location = useLocation()
  const current = view.current ?? (target.pathname === location.pathname && (target.search === '' || target.search === location.search))
  return (
    <Link to={view.to} aria-current={current ? 'page' : undefined}>
      {view.label}
      {current && <PlaceBall width={22} over={over} />}
    </Link>
  )
}
