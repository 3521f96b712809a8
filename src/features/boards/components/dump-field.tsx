import { useId, useState } from 'react'
import { dumpEndings } from '../dump-of-file.ts'

export interface DumpFieldProps {
  label: string
  fileName: string | null
  onFile: (file: File) => void
  help?: string
  pending?: boolean
}

/** Takes a dump: chosen, or dropped on it. The box names the file. */
export function DumpField({ label, fileName, onFile, help, pending = false }: DumpFieldProps) {
  const id = useId()
  const [over, setOver] = useState(false)
  const take = (files: FileList | null) => {
    if (files?.[0]) onFile(files[0])
  }
  return (
    <div>
      <label
        htmlFor={id}
        className={`flex min-h-[44px] cursor-pointer items-center rounded-[3px] border border-dashed px-3 text-13 focus-within:outline-2 focus-within:outline-offset-2 focus-within:outline-brass ${over ? 'border-brass bg-brass-wash' : 'border-rule bg-sheet'}`}
        onDragOver={(event) => {
          event.preventDefault()
          setOver(true)
        }}
        onDragLeave={() => setOver(false)}
        onDrop={(event) => {
          event.preventDefault()
          setOver(false)
          take(event.dataTransfer.files)
        }}
      >
        <span className="sr-only">{label}</span>
        <span className={fileName ? 'num [overflow-wrap:anywhere]' : 'text-ink-2'}>{pending ? 'reading …' : (fileName ?? 'choose the read-back, or drop it here')}</span>
        <input
          id={id}
          type="file"
          accept={dumpEndings}
          className="sr-only"
          onChange={(event) => {
            take(event.target.files)
            // The same file may be chosen again after the board was read anew.
            event.target.value = ''
          }}
        />
      </label>
      {help && <p className="help">{help}</p>}
    </div>
  )
}
