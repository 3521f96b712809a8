/** Addresses of single-use links as people/make-link.ts makes them. */
const anyLink = /\/links\/[\w-]{20,}/g
const instead = '/links/(masked: for its receiver alone)'

/** A mail's text without what opens an account: an administrator who read it could become another person. */
export function masked({ text, secretLink }: { text: string; secretLink?: string | null }): string {
  const withoutOwn = secretLink ? text.replaceAll(secretLink, secretLink.replace(/\/[^/]*$/, '/(masked: for its receiver alone)')) : text
  return withoutOwn.replaceAll(anyLink, instead)
}
