import { Ruler } from './ruler.tsx'
import type { RulerProps } from './ruler.tsx'

export interface EffectRulerProps extends Pick<RulerProps, 'label' | 'min' | 'max' | 'unit' | 'format' | 'policy' | 'scale'> {
  before: number | null
  after: number | null
  width?: number
}

/** What a change does to one figure, small: notch before, ball after, policy's stop. */
export function EffectRuler({ before, after, width = 122, ...rest }: EffectRulerProps) {
  return <Ruler {...rest} value={after} released={before} figures={false} width={width} />
}
