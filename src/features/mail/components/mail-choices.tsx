import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query'
import { choosable, choosableTopics, digestHour, type ChoosableTopic, type MailChoice, type MailChoicesView } from '../../../../shared/contract/mail.ts'
import { Region } from '../../../components/layout/region.tsx'
import { ProblemPanel } from '../../../components/problem/problem-panel.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { Select } from '../../../components/ui/select.tsx'
import { act } from '../../../lib/api-client.ts'
import { mailChoicesQuery } from '../queries.ts'

const choices = (['at once', 'daily digest', 'not'] as const satisfies readonly MailChoice[]).map((value) => ({ value, label: value === 'not' ? 'not at all' : value === 'daily digest' ? 'once a day' : 'at once' }))

/** Which mails come at once, once a day, or not at all; saved as they are chosen. */
export function MailChoicesSection() {
  const client = useQueryClient()
  const query = useQuery(mailChoicesQuery)
  const choose = useMutation({
    mutationFn: ({ topic, choice }: { topic: ChoosableTopic; choice: MailChoice }) => act<MailChoicesView>({ method: 'PUT', path: '/me/mail', body: { [topic]: choice } }),
    onSuccess: (view) => client.setQueryData(mailChoicesQuery.queryKey, view),
  })
  const shown = (topic: ChoosableTopic, view: MailChoicesView) => (choose.isPending && choose.variables.topic === topic ? choose.variables.choice : view[topic])
  return (
    <section aria-labelledby="mail-choices">
      <SectionHeading id="mail-choices">Mail</SectionHeading>
      <Region query={query} what="your choices" lines={5}>
        {(view) => (
          <ul>
            {choosableTopics.map((topic) => (
              <li key={topic} className="grid grid-cols-[minmax(0,1fr)_140px] items-center gap-x-4 border-b border-hairline py-1 text-13">
                <span aria-hidden="true">{choosable[topic].title}</span>
                <Select label={choosable[topic].title} hideLabel value={shown(topic, view)} options={choices} onChange={(choice) => choose.mutate({ topic, choice })} />
              </li>
            ))}
          </ul>
        )}
      </Region>
      <ProblemPanel className="mt-2" problem={choose.error} />
      <p className="mt-2 text-12 text-ink-2">
        The day’s digest goes out at <span className="num">{String(digestHour).padStart(2, '0')}:00</span> of the server’s clock. Mails about your account, and of a withdrawn release that you flashed, always come at once.
      </p>
    </section>
  )
}
