/** A key of the keyboard. */
export function Key({ children }: { children: string }) {
  return <kbd className="key">{children}</kbd>
}
