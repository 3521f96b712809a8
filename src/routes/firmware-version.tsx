import { useSuspenseQuery } from '@tanstack/react-query'
import { useDeferredValue, useMemo, useState } from 'react'
import { useNavigate, useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import { JsonEditor } from '../components/editor/json-editor.tsx'
import { FilterField } from '../components/layout/filter-field.tsx'
import { PageHead } from '../components/layout/page-head.tsx'
import { refusal } from '../components/layout/refused.ts'
import { UnsavedGuard } from '../components/layout/unsaved-guard.tsx'
import { fits, useUrlText } from '../components/layout/use-url-state.ts'
import { Button } from '../components/ui/button.tsx'
import { ErrorPanel } from '../components/ui/error-panel.tsx'
import { Hash } from '../components/ui/hash.tsx'
import { KeyValueList } from '../components/ui/key-value-list.tsx'
import { LinkButton } from '../components/ui/link-button.tsx'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { Time } from '../components/ui/time.tsx'
import { ViewSwitch } from '../components/ui/view-switch.tsx'
import { AddressMap } from '../features/firmware/components/address-map.tsx'
import { DraftVersionDialog } from '../features/firmware/components/draft-version-dialog.tsx'
import { FirmwareImage } from '../features/firmware/components/firmware-image.tsx'
import { ParameterTable } from '../features/firmware/components/parameter-table.tsx'
import { SchemaEditor } from '../features/firmware/components/schema-editor.tsx'
import { SignVersionDialog } from '../features/firmware/components/sign-version-dialog.tsx'
import { VersionState } from '../features/firmware/components/version-state.tsx'
import { firmwareLinesQuery, firmwareVersionQuery } from '../features/firmware/queries.ts'
import { readDraft } from '../features/firmware/read-draft.ts'
import { useDraft } from '../features/firmware/use-draft.ts'
import { count, formatBytes } from '../lib/format.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = ({ params }: LoaderFunctionArgs) =>
  Promise.all([queryClient.ensureQueryData(firmwareLinesQuery), queryClient.ensureQueryData(firmwareVersionQuery(params.line!, params.version!))])

/** The version that came before, or the one after it where it is the first; newest first in the list. */
function versionBefore(versions: readonly { version: string }[], version: string): string | undefined {
  const at = versions.findIndex((v) => v.version === version)
  return (versions[at + 1] ?? versions[at - 1])?.version
}

/** Typed text belongs to one version: another one begins afresh. */
export function Component() {
  const { line, version } = useParams()
  return <VersionPage key={`${line} ${version}`} line={line!} version={version!} />
}

function VersionPage(params: { line: string; version: string }) {
  const version = useSuspenseQuery(firmwareVersionQuery(params.line, params.version)).data
  const line = useSuspenseQuery(firmwareLinesQuery).data.find((l) => l.key === version.line)
  const navigate = useNavigate()
  const [view] = useUrlText('view')
  const [filter, setFilter] = useUrlText('filter')
  const [chosen, setChosen] = useUrlText('parameter')
  const draft = useDraft(version)
  const [dialog, setDialog] = useState<'publish' | 'retire' | 'draft' | null>(null)
  const deferred = useDeferredValue(draft.text)
  const reading = useMemo(() => readDraft(deferred), [deferred])
  const name = `${version.line} ${version.version}`
  const showsSchema = view === 'schema'
  const parameters = version.parameterList.filter((p) => fits(filter, p.name, p.title, p.unit, p.role, p.register?.encoding, p.register && `0x${p.register.address.toString(16)}`))
  return (
    <>
      <PageHead
        kicker={<TextLink to={paths.firmware()}>Firmware</TextLink>}
        title={name}
        aside={
          <KeyValueList
            entries={[
              { key: 'written by', value: version.writers.join(', ') },
              ...(version.publishedAt ? [{ key: 'published', value: <>{version.publishedBy}, <Time at={version.publishedAt} /></> }] : []),
              ...(version.retiredAt ? [{ key: 'retired', value: <>{version.retiredBy}, <Time at={version.retiredAt} /></> }] : []),
              { key: 'schema', value: <Hash hash={version.schemaHash} bytes={8} /> },
            ]}
          />
        }
        actions={
          <>
            {line && line.versions.length > 1 && <LinkButton to={paths.firmwareComparison(version.line, { from: versionBefore(line.versions, version.version), to: version.version })}>Compare…</LinkButton>}
            {line?.may.draftVersion.allowed && <Button onClick={() => setDialog('draft')}>Draft the next…</Button>}
            {version.state === 'draft' && (
              <Button kind="primary" unavailable={draft.dirty ? 'Save the draft first.' : refusal(version.may.publish)} onClick={() => setDialog('publish')}>
                Publish…
              </Button>
            )}
            {version.state === 'published' && (
              <Button kind="danger" unavailable={refusal(version.may.retire)} onClick={() => setDialog('retire')}>
                Retire…
              </Button>
            )}
          </>
        }
      >
        <VersionState state={version.state} /> <span className="ml-2">{count(version.parameters, 'parameter')}, image of {formatBytes(version.imageBytes)}, {version.image.addressWidth}-bit addresses</span>
      </PageHead>
      <ViewSwitch
        label="views of the version"
        views={[
          { label: 'register map', to: '?', current: !showsSchema },
          { label: 'schema', to: '?view=schema', current: showsSchema },
        ]}
      />
      <div className="mt-6">
        {showsSchema ? (
          version.may.edit.allowed ? (
            <SchemaEditor version={version} draft={draft} reading={reading} />
          ) : (
            <>
              <JsonEditor readOnly label={`parameter schema of ${name}`} path={`firmware/${version.line}-${version.version}.json`} value={version.schemaText} height="min(70vh, 800px)" />
              <p className="help">{version.may.edit.why}</p>
            </>
          )
        ) : (
          <>
            {draft.dirty && <ErrorPanel className="mb-4" title="The map shows what you typed, the table what is saved" whatToDo="Save the draft in the schema view." />}
            {reading.schema ? (
              <section aria-labelledby="map" className="mb-8">
                <SectionHeading id="map" className="mb-2" aux={`${count(version.image.length, 'byte')} from 0x${version.image.base.toString(16).toUpperCase().padStart(2, '0')}`}>
                  Address space
                </SectionHeading>
                <AddressMap schema={reading.schema} chosen={chosen} onChoose={setChosen} />
              </section>
            ) : (
              <ErrorPanel className="mb-4" title="The map cannot be drawn" happened={`The schema has ${count(reading.marks.length, 'place')} to correct.`} whatToDo="They are marked in the schema view." />
            )}
            <section aria-labelledby="parameters">
              <SectionHeading id="parameters" actions={<FilterField label="filter parameters" value={filter} onChange={setFilter} />}>
                Parameters
              </SectionHeading>
              <ParameterTable parameters={parameters} chosen={chosen} onChoose={(p) => setChosen(p === chosen ? '' : p)} />
            </section>
          </>
        )}
        {!showsSchema && <FirmwareImage version={version} hold={draft.dirty ? 'Save the draft first.' : null} />}
        {version.advice.length > 0 && !showsSchema && (
          <section aria-labelledby="advice" className="mt-8">
            <SectionHeading id="advice">Worth a second look</SectionHeading>
            <ul className="mt-1 text-13">
              {version.advice.map((a) => (
                <li key={`${a.pointer} ${a.message}`} className="border-b border-hairline py-1">
                  <span className="num text-ink-2">{a.pointer}</span> {a.message}
                </li>
              ))}
            </ul>
          </section>
        )}
        {!(showsSchema && version.may.edit.allowed) && version.notes && (
          <section aria-labelledby="notes" className="mt-8">
            <SectionHeading id="notes">Notes</SectionHeading>
            <p className="mt-1 max-w-[80ch] whitespace-pre-wrap">{version.notes}</p>
          </section>
        )}
      </div>
      <UnsavedGuard dirty={draft.dirty} what="The draft" onSave={draft.save} />
      {(dialog === 'publish' || dialog === 'retire') && <SignVersionDialog version={version} what={dialog} onClose={() => setDialog(null)} />}
      {dialog === 'draft' && line && <DraftVersionDialog line={line} onClose={() => setDialog(null)} onDrafted={(v) => void navigate(`${paths.firmwareVersion(v.line, v.version)}?view=schema`)} />}
    </>
  )
}
