import '../components/setup-dom.ts'
import { configure } from '@testing-library/react'
import { afterEach, vi } from 'vitest'
import { setActToken } from '../../src/lib/api-client.ts'
import { queryClient } from '../../src/lib/query-client.ts'

// Pages are fetched when first opened, which takes as long as the machine is busy; nothing here asserts how long.
configure({ asyncUtilTimeout: 15_000 })

// jsdom lays nothing out and scrolls nothing.
window.scrollTo = () => {}
Element.prototype.scrollIntoView = () => {}
// The router makes its requests with the page's own AbortSignal, which Node's Request refuses; nothing here looks at it.
const NodeRequest = globalThis.Request
globalThis.Request = class extends NodeRequest {
  constructor(input: RequestInfo | URL, init?: RequestInit) {
    super(input, init && { ...init, signal: undefined })
  }
}

afterEach(() => {
  queryClient.clear()
  setActToken('')
  vi.unstubAllGlobals()
})
