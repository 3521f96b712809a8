import { useState } from 'react'
import { Button } from '../../../components/ui/button.tsx'
import { curlExamples, type CurlSubject } from '../curl-lines.ts'

/** Lines to paste into a shell, each with a way to copy it. */
export function CurlExamples({ subject }: { subject: CurlSubject }) {
  return (
    <ol className="grid gap-3">
      {curlExamples(subject).map((example) => (
        <Example key={example.words} {...example} />
      ))}
    </ol>
  )
}

function Example({ words, lines }: { words: string; lines: string }) {
  const [copied, setCopied] = useState(false)
  const copy = () => navigator.clipboard.writeText(lines).then(() => setCopied(true), () => setCopied(false))
  return (
    <li className="min-w-0">
      <div className="flex items-baseline gap-3 text-13">
        <span className="flex-1">{words}</span>
        <Button kind="link" small onClick={() => void copy()} aria-label={`Copy: ${words}`}>
          {copied ? 'copied' : 'copy'}
        </Button>
      </div>
      <pre className="num overflow-x-auto rounded-[3px] border border-hairline bg-paper px-3 py-2 text-12 leading-[18px] whitespace-pre" tabIndex={0}>
        {lines}
      </pre>
    </li>
  )
}
