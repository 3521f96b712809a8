import type { ComponentProps } from 'react'
import { Link } from 'react-router'

export interface LinkButtonProps extends ComponentProps<typeof Link> {
  kind?: 'plain' | 'primary' | 'danger' | 'link'
  small?: boolean
}

/** A place to go to that looks like a button. */
export function LinkButton({ kind = 'plain', small = false, className = '', ...rest }: LinkButtonProps) {
  return <Link {...rest} className={['btn', kind === 'plain' ? '' : `btn-${kind}`, small ? 'btn-small' : '', className].filter(Boolean).join(' ')} />
}
