import { useMutation, useQueryClient } from '@tanstack/react-query'
import type { BoardTablePreview, BoardView, CompareDump, DumpComparison, ImportBoards, MachineBoards, ReadBoardBack, RecordFlash, RecordMachine, RetireBoard, SeatBoard } from '../../../shared/contract/boards.ts'
import { act } from '../../lib/api-client.ts'

const part = encodeURIComponent

/** Boards wherever they are shown, and the traces that acts at the bench leave. */
function useStale() {
  const client = useQueryClient()
  return () => Promise.all([['boards'], ['ledger'], ['machines']].map((queryKey) => client.invalidateQueries({ queryKey })))
}

export function useRecordFlash(machine: string) {
  const stale = useStale()
  return useMutation({ mutationFn: (body: RecordFlash) => act<BoardView>({ path: `/machines/${part(machine)}/flashes`, body }), onSuccess: stale })
}

export function useRecordMachine() {
  const stale = useStale()
  return useMutation({ mutationFn: ({ machine, ...body }: RecordMachine & { machine: string }) => act<MachineBoards>({ path: `/machines/${part(machine)}/flashes/bulk`, body }), onSuccess: stale })
}

export function useSeatBoard() {
  const stale = useStale()
  return useMutation({ mutationFn: ({ machine, ...body }: SeatBoard & { machine: string }) => act<BoardView>({ path: `/machines/${part(machine)}/boards`, body }), onSuccess: stale })
}

export function useRetireBoard(serial: string) {
  const stale = useStale()
  return useMutation({ mutationFn: (body: RetireBoard) => act<BoardView>({ path: `/boards/${part(serial)}/retire`, body }), onSuccess: stale })
}

export function useReadBack(serial: string) {
  const stale = useStale()
  return useMutation({ mutationFn: (body: ReadBoardBack) => act<BoardView>({ path: `/boards/${part(serial)}/read-backs`, body }), onSuccess: stale })
}

/** Looks at a dump without recording anything. */
export const useCompareDump = (machine: string, joint: string) => useMutation({ mutationFn: (body: CompareDump) => act<DumpComparison>({ path: `/machines/${part(machine)}/joints/${part(joint)}/compare-dump`, body }) })

export const usePreviewImport = () => useMutation({ mutationFn: ({ machine, text }: { machine: string; text: string }) => act<BoardTablePreview>({ path: `/machines/${part(machine)}/boards/preview`, body: { text } }) })

export function useImportBoards() {
  const stale = useStale()
  return useMutation({ mutationFn: ({ machine, ...body }: ImportBoards & { machine: string }) => act<BoardTablePreview>({ path: `/machines/${part(machine)}/boards/import`, body }), onSuccess: stale })
}
