import { useQuery } from '@tanstack/react-query'
import { useState } from 'react'
import { Region } from '../../../components/layout/region.tsx'
import { Button } from '../../../components/ui/button.tsx'
import { SectionHeading } from '../../../components/ui/section-heading.tsx'
import { benchKeysQuery } from '../queries.ts'
import { BenchKeyList } from './bench-key-list.tsx'
import { MakeBenchKeyDialog } from './make-bench-key-dialog.tsx'

/** Bench keys on the account page; nothing for somebody who has none and may make none. */
export function BenchKeysSection() {
  const keys = useQuery(benchKeysQuery)
  const [making, setMaking] = useState(false)
  if (keys.data && keys.data.machines.length === 0 && keys.data.keys.length === 0) return null
  return (
    <section aria-labelledby="bench-keys">
      <SectionHeading id="bench-keys" aux="for scripts on a bench computer">
        Bench keys
      </SectionHeading>
      <Region query={keys} what="your bench keys">
        {(data) => (
          <>
            <BenchKeyList keys={data} />
            {data.machines.length > 0 && (
              <Button className="mt-3" onClick={() => setMaking(true)}>
                Make a bench key…
              </Button>
            )}
            {making && <MakeBenchKeyDialog machines={data.machines} onClose={() => setMaking(false)} />}
          </>
        )}
      </Region>
    </section>
  )
}
