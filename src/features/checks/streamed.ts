const open = new Set<string>()

/** Whether a stream tells of a change's check, so that nothing need be asked at intervals. */
export const isStreamed = (change: string): boolean => open.has(change)

export function setStreamed(change: string, is: boolean): void {
  if (is) open.add(change)
  else open.delete(change)
}
