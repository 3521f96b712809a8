import type { HelpTopic } from '../../../shared/help/topic.ts'

/** An explanation: title, a few sentences, formula, source. */
export function HelpText({ help, level = 'h3' }: { help: HelpTopic; level?: 'h3' | 'h4' }) {
  const Heading = level
  return (
    <>
      <Heading className="text-14 font-semibold">{help.title}</Heading>
      <p className="mt-1 text-13">{help.text}</p>
      {help.formula && <p className="num mt-2 border-l-2 border-rule pl-3 text-13">{help.formula}</p>}
      <p className="mt-2 text-12 text-ink-2">Source: {help.source}</p>
    </>
  )
}
