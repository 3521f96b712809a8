import { queryOptions } from '@tanstack/react-query'
import type { BusView, FamilyView, JointView, MachineSummary, MachineView } from '../../../shared/contract/machines.ts'
import { get } from '../../lib/api-client.ts'

const part = encodeURIComponent

export const machinesQuery = queryOptions({ queryKey: ['machines'], queryFn: ({ signal }) => get<MachineSummary[]>('/machines', { signal }) })

export const machineQuery = (machine: string) => queryOptions({ queryKey: ['machines', machine], queryFn: ({ signal }) => get<MachineView>(`/machines/${part(machine)}`, { signal }) })

export const jointQuery = (machine: string, joint: string) =>
  queryOptions({ queryKey: ['machines', machine, 'joints', joint], queryFn: ({ signal }) => get<JointView>(`/machines/${part(machine)}/joints/${part(joint)}`, { signal }) })

export const familyQuery = (machine: string, family: string) =>
  queryOptions({ queryKey: ['machines', machine, 'families', family], queryFn: ({ signal }) => get<FamilyView>(`/machines/${part(machine)}/families/${part(family)}`, { signal }) })

export const busQuery = (machine: string, bus: string) =>
  queryOptions({ queryKey: ['machines', machine, 'buses', bus], queryFn: ({ signal }) => get<BusView>(`/machines/${part(machine)}/buses/${part(bus)}`, { signal }) })
