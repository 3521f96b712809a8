/** A number set so that decimal points stand under one another: what is missing to `places` characters from the point on is left free. */
export function DecimalText({ text, places }: { text: string | null; places: number }) {
  if (text === null) {
    return (
      <span className="num text-ink-2" style={{ paddingRight: `${places}ch` }}>
        <span aria-hidden="true">–</span>
        <span className="sr-only">none</span>
      </span>
    )
  }
  const point = text.indexOf('.')
  const after = point < 0 ? 0 : text.length - point
  return (
    <span className="num grouped" style={{ paddingRight: `${places - after}ch` }}>
      {text}
    </span>
  )
}
