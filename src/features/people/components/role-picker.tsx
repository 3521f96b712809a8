import type { Role, RoleGrantRequest } from '../../../../shared/contract/people.ts'
import { roles, signingRoles } from '../../../../shared/contract/people.ts'
import { Select } from '../../../components/ui/select.tsx'

export interface RolePickerProps {
  value: RoleGrantRequest
  onChange: (value: RoleGrantRequest) => void
  machines: readonly { key: string; name: string }[]
  roleError?: string | null
  machineError?: string | null
}

const ALL = '*'

/** A role, and where it holds. */
export function RolePicker({ value, onChange, machines, roleError, machineError }: RolePickerProps) {
  return (
    <div>
      <div className="grid gap-3 sm:grid-cols-2">
        <Select label="Role" value={value.role} onChange={(role: Role) => onChange({ ...value, role })} options={roles.map((r) => ({ value: r, label: r }))} error={roleError} />
        <Select
          label="On"
          value={value.machine ?? ALL}
          onChange={(machine: string) => onChange({ ...value, machine: machine === ALL ? null : machine })}
          options={[{ value: ALL, label: 'all machines' }, ...machines.map((m) => ({ value: m.key, label: m.name }))]}
          error={machineError}
        />
      </div>
      {signingRoles.includes(value.role) && <p className="help">A signing role: it gives no right to sign until another signer confirms it.</p>}
    </div>
  )
}
