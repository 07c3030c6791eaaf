import { execFileSync } from 'node:child_process'
import { readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Page } from 'playwright-core'
import { goTo, hasChromium, importFiles, root, startApp, type RunningApp } from './app.ts'

const NETLIST = join(root, 'assets/demo/fern.bench')
const PATTERNS = join(root, 'assets/demo/fern-b.vec')

/** The same coverage from the command line, another door onto the same engine. */
function coverageByCommandLine(): { detected: number; total: number } {
  const printed = execFileSync(
    process.execPath,
    [join(root, 'out/node/cli.js'), 'coverage', NETLIST, PATTERNS, '--json'],
    { encoding: 'utf8' },
  )
  const { detected, faults } = JSON.parse(printed)
  return { detected: detected.total, total: faults.total }
}

async function answerOf(page: Page): Promise<string> {
  return (await page.getByTestId('answer').textContent()) ?? ''
}

const isNumber = (text: string | undefined): number => Number(text?.replace(/[^\d.]/g, ''))

describe.skipIf(!hasChromium)('the main job in a browser', () => {
  let app: RunningApp
  let page: Page
  beforeAll(async () => {
    app = await startApp()
    page = await app.open()
  })
  afterAll(() => app.close())

  it('begins with a project and a product', async () => {
    await page.getByRole('button', { name: 'New project…' }).click()
    await page.getByLabel('Name').fill('Bench garden')
    await page.getByRole('button', { name: 'Create project' }).click()
    await page.getByRole('button', { name: 'New product…' }).click()
    await page.getByLabel('Name').fill('Fennel')
    await page.getByRole('button', { name: 'Create product' }).click()
    await page.getByRole('heading', { level: 1, name: 'Fennel' }).waitFor()
    await page.getByText('Bring in a netlist').waitFor()
  })

  it('shows what is wrong with a file, with its place, and saves nothing', async () => {
    const broken = join(app.folder, 'broken.bench')
    writeFileSync(broken, 'INPUT(a)\nOUTPUT(y)\ny = NADN(a, b)\n')
    await page.getByRole('button', { name: 'Import files…' }).click()
    await importFiles(page, [broken])
    await page.getByText('"NADN" is no gate of this format').waitFor()
    expect(await page.getByText('Did you mean "NAND"?').isVisible()).toBe(true)
    expect(await page.getByText('broken.bench:3:5').isVisible()).toBe(true)
    expect(await page.getByRole('button', { name: 'Save netlist' }).isDisabled()).toBe(true)
    await page.getByRole('button', { name: 'Leave out broken.bench' }).click()
  })

  it('reads netlist and patterns, shows what was understood, and saves both', async () => {
    await importFiles(page, [NETLIST, PATTERNS])
    await page.getByText('11,382').waitFor()
    await page.getByLabel('Save as revision').fill('r1')
    await page.getByRole('button', { name: 'Save netlist' }).click()
    await page.getByText('Netlist r1 is saved.').waitFor()
    await page.getByRole('heading', { name: 'Pattern set' }).waitFor()
    await page.getByRole('button', { name: 'Save pattern set' }).click()
    await page.getByText('Pattern set fern-b is saved.').waitFor()
    await page.getByRole('button', { name: 'Go to the product' }).click()
  })

  it('runs, and finds what the command line finds', async () => {
    await page.getByRole('button', { name: 'New run…' }).first().click()
    await page.getByRole('button', { name: 'Start run' }).click()
    await page.getByRole('link', { name: 'Budget of run 1' }).click({ timeout: 60_000 })
    await page.getByTestId('answer').waitFor()
    const { detected, total } = coverageByCommandLine()
    await page.getByRole('slider').press('End')
    await page.getByRole('textbox', { name: 'Patterns' }).fill('1000')
    await page.getByRole('textbox', { name: 'Patterns' }).press('Enter')
    const answer = await answerOf(page)
    expect(answer).toContain('1,000 of 1,000 patterns')
    expect(answer).toContain(`${((100 * detected) / total).toFixed(2)}`)
    expect(answer).toContain(`of ${total.toLocaleString('en')} faults`)
  })

  it('moves the cut by dragging: sentence, field and table follow', async () => {
    const box = (await page.getByRole('slider').boundingBox())!
    await page.mouse.move(box.x + box.width * 0.5, box.y + box.height * 0.5)
    await page.mouse.down()
    await page.mouse.move(box.x + box.width * 0.2, box.y + box.height * 0.5, { steps: 5 })
    await page.mouse.up()
    const cut = async (): Promise<number> => isNumber((await answerOf(page)).split(' of ')[0])
    await expect.poll(cut).toBeLessThan(400)
    expect(await cut()).toBeGreaterThan(0)
    await expect
      .poll(async () => isNumber(await page.getByRole('textbox', { name: 'Patterns' }).inputValue()))
      .toBe(await cut())
    await expect.poll(() => page.getByRole('slider').getAttribute('aria-valuenow')).toBe(String(await cut()))
  })

  it('follows an assumption as it is typed', async () => {
    const before = await answerOf(page)
    await page.getByRole('textbox', { name: 'Yield' }).fill('0.5')
    await expect
      .poll(async () => isNumber(/estimated ([\d,]+)/.exec(await answerOf(page))?.[1]))
      .toBeGreaterThan(isNumber(/estimated ([\d,]+)/.exec(before)?.[1]))
    await page.getByRole('textbox', { name: 'Yield' }).fill('1.5')
    await page.getByRole('alert').filter({ hasText: /\S/ }).first().waitFor()
    await page.getByRole('textbox', { name: 'Yield' }).fill('0.5')
  })

  it('proves a ceiling that is never below the cut', async () => {
    await page.getByRole('button', { name: 'Prove the ceiling' }).click()
    await page
      .getByTestId('state')
      .getByText(/No choice of/)
      .waitFor({ timeout: 60_000 })
    const words = await page.getByTestId('state').textContent()
    const [limit, own] = [...words!.matchAll(/(?:more than|detects) ([\d,]+)/g)].map((found) =>
      isNumber(found[1]),
    )
    expect(limit).toBeGreaterThanOrEqual(own ?? limit!)
  })

  it('keeps the cut as a budget and exports a report that says the same', async () => {
    await page.getByRole('textbox', { name: 'Patterns' }).fill('60')
    await page.getByRole('textbox', { name: 'Patterns' }).press('Enter')
    await page.getByRole('button', { name: 'Keep as budget' }).first().click()
    await page.getByRole('dialog').getByLabel('Name').fill('Launch')
    await page.getByRole('dialog').getByRole('button', { name: 'Keep as budget' }).click()
    await page.getByRole('dialog').waitFor({ state: 'detached' })
    await page
      .getByRole('button', { name: /^Launch/ })
      .first()
      .waitFor()
    await page.getByRole('button', { name: 'Export report…' }).click()
    const [download] = await Promise.all([
      page.waitForEvent('download'),
      page.getByRole('button', { name: 'Export', exact: true }).click(),
    ])
    const report = readFileSync(await download.path(), 'utf8')
    expect(download.suggestedFilename()).toMatch(/\.html$/)
    expect(report).toContain('60')
    expect(report.toLowerCase()).toContain('no safety case')
    expect(report).not.toContain('<script')
  })

  it('has everything again after the host was ended and started', async () => {
    await app.restart()
    page = await app.open()
    await page.getByRole('button', { name: 'Bench garden' }).click()
    await page.getByRole('heading', { level: 1, name: 'Fennel' }).waitFor()
    await page.getByRole('link', { name: 'Launch' }).click()
    await expect.poll(() => answerOf(page), { timeout: 10_000 }).toContain('60 of 1,000 patterns')
  })

  it('takes back what was deleted', async () => {
    await page.getByRole('link', { name: 'Overview' }).click()
    await page.getByRole('button', { name: 'Delete Launch' }).click()
    await page.getByRole('link', { name: 'Launch' }).waitFor({ state: 'detached' })
    await page.getByRole('button', { name: 'Undo' }).click()
    await page.getByRole('link', { name: 'Launch' }).waitFor()
  })

  it('answers a click within 100 ms while a run is on', async () => {
    const patterns = readFileSync(PATTERNS, 'utf8')
    const many = join(app.folder, 'many.vec')
    writeFileSync(many, patterns.repeat(40))
    await goTo(page, '#/products/1/import')
    await importFiles(page, [many])
    await page.getByText('40,000').waitFor({ timeout: 60_000 })
    await page.getByRole('button', { name: 'Save pattern set' }).click()
    await page.getByText('Pattern set many is saved.').waitFor()
    await page.getByRole('button', { name: 'Go to the product' }).click()
    await page.getByRole('button', { name: 'New run…' }).first().click()
    await page.getByRole('button', { name: 'Start run' }).click()
    await page
      .getByText('Run 2')
      .first()
      .waitFor({ timeout: 5000 })
      .catch(() => undefined)
    const waits: number[] = []
    for (const [name, heading] of [
      ['Settings', 'Settings'],
      ['Tasks', 'Tasks'],
      ['Testers', 'Testers'],
      ['Settings', 'Settings'],
    ] as const) {
      waits.push(
        await page.evaluate(
          async ([link, title]) => {
            const target = [...document.querySelectorAll<HTMLAnchorElement>('nav a')].find((each) =>
              each.textContent?.includes(link!),
            )
            const started = performance.now()
            target?.click()
            while (!document.querySelector('h1')?.textContent?.includes(title!))
              await new Promise((next) => requestAnimationFrame(next))
            return performance.now() - started
          },
          [name, heading],
        ),
      )
    }
    waits.sort((a, b) => a - b)
    expect(waits[1]).toBeLessThan(100)
  })
})
