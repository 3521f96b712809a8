import { useQuery } from '@tanstack/react-query'
import { setTheme, themes, useTheme } from '../lib/theme.ts'
import type { Theme } from '../lib/theme.ts'
import { PageHead } from '../components/layout/page-head.tsx'
import { Region } from '../components/layout/region.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { Select } from '../components/ui/select.tsx'
import { BenchKeysSection } from '../features/bench-keys/components/bench-keys-section.tsx'
import { ChangePasswordForm } from '../features/people/components/change-password-form.tsx'
import { MailChoicesSection } from '../features/mail/components/mail-choices.tsx'
import { RoleList } from '../features/people/components/role-list.tsx'
import { SecondFactorSection } from '../features/people/components/second-factor-section.tsx'
import { SessionList } from '../features/people/components/session-list.tsx'
import { sessionsQuery } from '../features/people/queries.ts'
import { machinesQuery } from '../features/machines/queries.ts'
import { useMe } from '../lib/me.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = () => {
  void queryClient.prefetchQuery(sessionsQuery)
  return null
}

const words: Record<Theme, string> = { system: 'as the system', light: 'light', dark: 'dark' }

export function Component() {
  const me = useMe()
  const sessions = useQuery(sessionsQuery)
  const machines = useQuery(machinesQuery).data ?? []
  const theme = useTheme()
  return (
    <>
      <PageHead title={me.name} documentTitle="Account" kicker="account">
        {me.email}
      </PageHead>
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-14 gap-y-8 lg:grid-cols-2">
        <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-8">
          <section aria-labelledby="roles">
            <SectionHeading id="roles">Roles</SectionHeading>
            {me.signingHold && <p className="py-1 text-13 text-plum">Your signatures wait until another signer confirms you: {me.signingHold}.</p>}
            <RoleList roles={me.roles} machineName={(key) => machines.find((m) => m.key === key)?.name ?? key} />
          </section>
          <section aria-labelledby="sessions">
            <SectionHeading id="sessions">Sessions</SectionHeading>
            <Region query={sessions} what="your sessions">
              {(list) => <SessionList sessions={list} />}
            </Region>
          </section>
          <BenchKeysSection />
          <MailChoicesSection />
        </div>
        <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-8">
          <section aria-labelledby="password">
            <SectionHeading id="password" className="mb-3">Password</SectionHeading>
            <ChangePasswordForm email={me.email} />
          </section>
          <SecondFactorSection own={me.secondFactor} />
          <section aria-labelledby="look">
            <SectionHeading id="look" className="mb-3">Look</SectionHeading>
            <Select label="Light or dark" width={200} value={theme} onChange={setTheme} options={themes.map((t) => ({ value: t, label: words[t] }))} />
          </section>
        </div>
      </div>
    </>
  )
}
