import { useQuery, useSuspenseQuery } from '@tanstack/react-query'
import { useParams } from 'react-router'
import type { LoaderFunctionArgs } from 'react-router'
import { paths } from '../app/paths.ts'
import { FilterField } from '../components/layout/filter-field.tsx'
import { PageHead } from '../components/layout/page-head.tsx'
import { fits, useUrlText } from '../components/layout/use-url-state.ts'
import { SectionHeading } from '../components/ui/section-heading.tsx'
import { TextLink } from '../components/ui/text-link.tsx'
import { DriveTrainHistory } from '../features/machines/components/drive-train-history.tsx'
import { machineBoardsQuery } from '../features/boards/queries.ts'
import { DriveTrainSheet } from '../features/machines/components/drive-train.tsx'
import { FamilyValues } from '../features/machines/components/family-values.tsx'
import { JointTable } from '../features/machines/components/joint-table.tsx'
import { DraftChangeButton } from '../features/machines/components/draft-change-button.tsx'
import { MachineFrame } from '../features/machines/components/machine-frame.tsx'
import { FromRelease } from '../features/machines/components/release-shown.tsx'
import { familyQuery, machineQuery } from '../features/machines/queries.ts'
import { count } from '../lib/format.ts'
import { queryClient } from '../lib/query-client.ts'

export const loader = ({ params }: LoaderFunctionArgs) =>
  Promise.all([queryClient.ensureQueryData(machineQuery(params.machine!)), queryClient.ensureQueryData(familyQuery(params.machine!, params.family!))])

export function Component() {
  const params = useParams()
  const machine = useSuspenseQuery(machineQuery(params.machine!)).data
  const boards = useQuery(machineBoardsQuery(params.machine!)).data
  const family = useSuspenseQuery(familyQuery(params.machine!, params.family!)).data
  const [filter, setFilter] = useUrlText('filter')
  return (
    <>
      <PageHead
        kicker={
          <>
              <TextLink to={paths.machine(family.machine)}>{family.machineName}</TextLink>, family
          </>
        }
        title={family.settings.name}
        documentTitle={`${family.settings.name}, ${family.machineName}`}
        actions={
          <>
            <div className="text-13 text-ink-2">
              as in release <FromRelease machine={family.machine} shown={family.shown} />
            </div>
            <DraftChangeButton machine={machine} />
          </>
        }
      >
        {count(family.joints.length, 'joint')} built alike: one drive train, shared values
      </PageHead>
      <MachineFrame machine={machine} boards={boards}>
        <section aria-labelledby="joints" className="mb-8">
          <SectionHeading id="joints">Joints</SectionHeading>
          <JointTable machine={family.machine} joints={family.joints} without={['family']} />
        </section>
        <section aria-labelledby="values" className="mb-8">
          <SectionHeading id="values" actions={<FilterField label="filter values" value={filter} onChange={setFilter} />}>
            Shared values
          </SectionHeading>
          <FamilyValues machine={family.machine} joints={family.joints} values={family.values.filter((v) => fits(filter, v.name, v.title, v.unit, v.role))} />
        </section>
        <section aria-labelledby="drive" className="mb-8">
          <SectionHeading id="drive" aux={family.driveTrainNumber === null ? undefined : <span className="num">d{family.driveTrainNumber}</span>}>
            Drive train
          </SectionHeading>
          <DriveTrainSheet driveTrain={family.settings.driveTrain} />
        </section>
        {family.driveTrainHistory.length > 1 && (
          <section aria-labelledby="drive-history">
            <SectionHeading id="drive-history">Drive trains so far</SectionHeading>
            <DriveTrainHistory history={family.driveTrainHistory} />
          </section>
        )}
      </MachineFrame>
    </>
  )
}
