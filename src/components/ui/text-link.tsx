import type { ComponentProps } from 'react'
import { Link } from 'react-router'

/** A link in running text. */
export function TextLink({ className = '', ...rest }: ComponentProps<typeof Link>) {
  return <Link {...rest} className={`link ${className}`} />
}
