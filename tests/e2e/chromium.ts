import { existsSync, mkdtempSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { chromium, type BrowserContext } from 'playwright-core'

/** The installed Chromium. @throws Error saying how to get it */
export function chromiumPath(): string {
  const found = [process.env.DETENT_CHROMIUM, '/usr/bin/chromium', '/usr/bin/chromium-browser', '/usr/bin/google-chrome'].find((p) => p && existsSync(p))
  if (!found) throw new Error('The browser tests need Chromium. On Debian: sudo apt-get install chromium; elsewhere set DETENT_CHROMIUM to its path.')
  return found
}

/** A browser with a new, empty profile that asks nobody on the network for anything. */
export function openBrowser(options: { width?: number; height?: number; dark?: boolean; reducedMotion?: boolean } = {}): Promise<BrowserContext> {
  const { width = 1440, height = 1000, dark = false, reducedMotion = true } = options
  return chromium.launchPersistentContext(mkdtempSync(join(tmpdir(), 'detent-browser-')), {
    executablePath: chromiumPath(),
    headless: true,
    args: ['--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync'],
    viewport: { width, height },
    colorScheme: dark ? 'dark' : 'light',
    reducedMotion: reducedMotion ? 'reduce' : 'no-preference',
    acceptDownloads: true,
  })
}
