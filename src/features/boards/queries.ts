import { queryOptions } from '@tanstack/react-query'
import type { BenchCard, BenchTask, BoardList, BoardView, JointBoards, MachineBoards } from '../../../shared/contract/boards.ts'
import { get, withQuery } from '../../lib/api-client.ts'

const part = encodeURIComponent

export const boardsQuery = (retired: boolean) => queryOptions({ queryKey: ['boards', 'list', retired], queryFn: ({ signal }) => get<BoardList>(withQuery('/boards', { retired: retired ? 'yes' : '' }), { signal }) })

export const boardQuery = (serial: string) => queryOptions({ queryKey: ['boards', 'one', serial], queryFn: ({ signal }) => get<BoardView>(`/boards/${part(serial)}`, { signal }) })

/** Every joint of a machine with the board there. */
export const machineBoardsQuery = (machine: string) => queryOptions({ queryKey: ['boards', 'machine', machine], queryFn: ({ signal }) => get<MachineBoards>(`/machines/${part(machine)}/boards`, { signal }) })

export const jointBoardsQuery = (machine: string, joint: string) => queryOptions({ queryKey: ['boards', 'joint', machine, joint], queryFn: ({ signal }) => get<JointBoards>(`/machines/${part(machine)}/joints/${part(joint)}/boards`, { signal }) })

/** Boards that hold a release, as known. */
export const holdingQuery = (machine: string, release: string) => queryOptions({ queryKey: ['boards', 'holding', machine, release], queryFn: ({ signal }) => get<BoardList>(withQuery('/boards', { machine, release }), { signal }) })

export const benchTasksQuery = queryOptions({ queryKey: ['boards', 'tasks'], queryFn: ({ signal }) => get<BenchTask[]>('/bench-tasks', { signal }) })

export const cardQuery = (machine: string, version: string, joint: string) =>
  queryOptions({ queryKey: ['boards', 'card', machine, version, joint], queryFn: ({ signal }) => get<BenchCard>(`/machines/${part(machine)}/releases/${part(version)}/joints/${part(joint)}/card`, { signal }) })

export const boardsCsvHref = (machine?: string) => `/api${withQuery('/boards.csv', { machine })}`
