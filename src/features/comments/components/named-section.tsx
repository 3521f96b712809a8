import { paths } from '../../../app/paths.ts'
import type { NamedView } from '../../../../shared/contract/comments.ts'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { TextLink } from '../../../components/ui/text-link.tsx'
import { Time } from '../../../components/ui/time.tsx'

/** Open comments that name the reader, the longest waiting first. Draws nothing when there are none: the desk shows what waits. */
export function NamedSection({ naming }: { naming: readonly NamedView[] }) {
  if (naming.length === 0) return null
  return (
    <section className="mb-6" aria-label="you are named">
      <SectionHeading aux={naming.length > 1 ? 'longest waiting first' : undefined}>You are named</SectionHeading>
      <ul>
        {naming.map((n) => (
          <li key={`${n.change} ${n.comment}`} className="border-b border-hairline py-3">
            <p className="flex flex-wrap items-baseline gap-x-3">
              <TextLink to={`${paths.changeReview(n.change)}#comment-${n.comment}`} className="!border-0 !text-ink">
                <span className="num mr-2 text-ink-2">{n.changeNumber}</span>
                {n.changeTitle}
              </TextLink>
              <span className="text-13 text-ink-2">{n.machineName}</span>
              <span className="ml-auto text-13 text-ink-2">
                {n.by}, <Time at={n.at} />
              </span>
            </p>
            {n.about && <p className="text-12 text-ink-2">{n.about}</p>}
            <p className="mt-1 line-clamp-3 [overflow-wrap:anywhere] whitespace-pre-wrap">{n.text}</p>
          </li>
        ))}
      </ul>
    </section>
  )
}
