import { spawn } from 'node:child_process'
import { existsSync, mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join, resolve } from 'node:path'
import { chromium, type Browser, type BrowserContextOptions, type Page } from 'playwright-core'

const CHROMIUM = ['/usr/bin/chromium', '/usr/bin/chromium-browser', '/usr/bin/google-chrome'].find((path) =>
  existsSync(path),
)
const ARGUMENTS = [
  '--no-sandbox',
  '--disable-gpu',
  '--disable-quic',
  '--no-first-run',
  '--disable-background-networking',
  '--disable-component-update',
  '--disable-sync',
]

/** Whether a Chromium is installed; suites that need it skip without. */
export const hasChromium: boolean = CHROMIUM !== undefined

if (!hasChromium) console.warn('skipped where needed: Chromium is not installed')

export const root: string = resolve(import.meta.dirname, '../..')

/** The built application on loopback, with folders of its own. */
export type RunningApp = {
  readonly url: string
  readonly folder: string
  open(options?: BrowserContextOptions): Promise<Page>
  /** Ends the host and starts it again on the same folders; pages have to be opened anew. */
  restart(signal?: NodeJS.Signals): Promise<void>
  close(): Promise<void>
}

export async function startApp(): Promise<RunningApp> {
  const folder = mkdtempSync(join(tmpdir(), 'tallycut-e2e-'))
  let browser: Browser | null = null
  let host = await startHost(folder)
  return {
    get url() {
      return host.url
    },
    folder,
    async open(options = {}) {
      browser ??= await chromium.launch({ executablePath: CHROMIUM ?? '', args: ARGUMENTS })
      const context = await browser.newContext({
        viewport: { width: 1280, height: 800 },
        acceptDownloads: true,
        ...options,
      })
      const page = await context.newPage()
      page.setDefaultTimeout(15_000)
      await page.goto(host.url)
      await page.getByRole('heading', { level: 1 }).first().waitFor()
      return page
    },
    async restart(signal = 'SIGTERM') {
      await host.stop(signal)
      host = await startHost(folder)
    },
    async close() {
      await browser?.close()
      await host.stop('SIGTERM')
      rmSync(folder, { recursive: true, force: true })
    },
  }
}

async function startHost(
  folder: string,
): Promise<{ url: string; stop(signal: NodeJS.Signals): Promise<void> }> {
  const child = spawn(process.execPath, [join(root, 'out/node/cli.js'), 'serve'], {
    env: {
      ...process.env,
      TALLYCUT_USER_FOLDER: join(folder, 'user'),
      TALLYCUT_PROJECT_FOLDER: join(folder, 'projects'),
    },
    stdio: ['ignore', 'pipe', 'pipe'],
  })
  const ended = new Promise<void>((done) => child.once('exit', () => done()))
  const url = await new Promise<string>((found, failed) => {
    let printed = ''
    const hear = (chunk: Buffer): void => {
      printed += String(chunk)
      const address = /http:\/\/\S+/.exec(printed)?.[0]
      if (address) found(address)
    }
    child.stdout.on('data', hear)
    child.stderr.on('data', hear)
    child.once('exit', () => failed(new Error(`the host ended: ${printed}`)))
  })
  return {
    url,
    async stop(signal) {
      child.kill(signal)
      await ended
    },
  }
}

/** Goes to a screen by its address. */
export async function goTo(page: Page, hash: string): Promise<void> {
  await page.evaluate((next) => {
    location.hash = next
  }, hash)
}

/** Gives files to the Import screen. */
export async function importFiles(page: Page, paths: readonly string[]): Promise<void> {
  await page.getByLabel('Files to import').setInputFiles([...paths])
}

/** Builds the demo project, or opens it, and waits until its runs have ended. */
export async function openDemo(page: Page): Promise<void> {
  await page.getByRole('button', { name: 'Open the demo' }).click()
  await page.getByRole('link', { name: 'Budget of run 2' }).waitFor({ timeout: 60_000 })
}
