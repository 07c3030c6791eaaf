import { readFileSync } from 'node:fs'
import { createRequire } from 'node:module'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Page } from 'playwright-core'
import { goTo, hasChromium, startApp, type RunningApp } from './app.ts'

// SOURCE: axe-core's rules for WCAG 2.2, levels A and AA, and its best practices.
const axe = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8')

const SCREENS = [
  ['Projects', '#/'],
  ['Overview', '#/products/1/product'],
  ['Budget', '#/products/1/budget'],
  ['Faults lost', '#/products/1/faults-lost'],
  ['Assumptions', '#/products/1/assumptions'],
  ['Import', '#/products/1/import'],
  ['Testers', '#/testers'],
  ['Tasks', '#/tasks'],
  ['Settings', '#/settings'],
] as const

async function violationsOf(page: Page): Promise<string[]> {
  await page.evaluate(axe)
  return page.evaluate(async () => {
    const { violations } = await (
      globalThis as unknown as {
        axe: { run(): Promise<{ violations: { id: string; nodes: { html: string }[] }[] }> }
      }
    ).axe.run()
    return violations.map(
      ({ id, nodes }) => `${id}: ${nodes.map(({ html }) => html.slice(0, 160)).join(' | ')}`,
    )
  })
}

async function openDemo(page: Page): Promise<void> {
  await page.getByRole('button', { name: 'Open the demo' }).click()
  await page.getByRole('link', { name: 'Budget of run 2' }).waitFor({ timeout: 60_000 })
}

describe.skipIf(!hasChromium)('the window is open to everyone', () => {
  let app: RunningApp
  beforeAll(async () => {
    app = await startApp()
  })
  afterAll(() => app.close())

  it.each(['light', 'dark'] as const)('axe finds nothing on any screen, %s', async (colorScheme) => {
    const page = await app.open({ colorScheme })
    const found: Record<string, string[]> = {}
    if (colorScheme === 'light') {
      found['Start'] = await violationsOf(page)
      await openDemo(page)
    }
    for (const [name, hash] of SCREENS) {
      await goTo(page, hash)
      await page.waitForTimeout(name === 'Budget' ? 1500 : 500)
      found[name] = await violationsOf(page)
    }
    for (const [name, keys] of [
      ['Find or do', 'Control+k'],
      ['Keys', '?'],
    ] as const) {
      await page.keyboard.press(keys)
      await page.getByRole('dialog').waitFor()
      found[name] = await violationsOf(page)
      await page.keyboard.press('Escape')
      await page.getByRole('dialog').waitFor({ state: 'detached' })
    }
    expect(Object.fromEntries(Object.entries(found).filter(([, list]) => list.length > 0))).toEqual({})
    await page.context().close()
  })

  it('nothing is lost at 200 % zoom, and nothing scrolls sideways', async () => {
    const page = await app.open({ viewport: { width: 640, height: 400 }, deviceScaleFactor: 2 })
    for (const [name, hash] of SCREENS) {
      await goTo(page, hash)
      await page.getByRole('heading', { level: 1 }).first().waitFor()
      await page.waitForTimeout(name === 'Budget' ? 1000 : 300)
      const { wide, seen } = await page.evaluate(() => ({
        wide: document.documentElement.scrollWidth - document.documentElement.clientWidth,
        seen: document.querySelector('h1')?.getBoundingClientRect().height ?? 0,
      }))
      expect([name, wide]).toEqual([name, 0])
      expect(seen).toBeGreaterThan(0)
    }
    await page.context().close()
  })

  it('the main job can be done by keyboard alone', async () => {
    const page = await app.open()
    const command = async (words: string): Promise<void> => {
      await page.keyboard.press('Control+k')
      await page.getByRole('combobox').waitFor()
      await page.keyboard.type(words)
      await page.keyboard.press('Enter')
      await page.getByRole('combobox').waitFor({ state: 'detached' })
    }
    await command('open the demo')
    await page.getByRole('heading', { level: 1, name: 'Fern' }).waitFor()
    await command('go to budget')
    await page.getByTestId('answer').waitFor()
    await page.keyboard.press('c')
    await page.keyboard.press('Home')
    const slider = page.getByRole('slider')
    const valueNow = async (): Promise<number> => Number(await slider.getAttribute('aria-valuenow'))
    const beforeHome = await valueNow()
    await page.keyboard.press('End')
    await page.keyboard.press('Home')
    await page.waitForTimeout(300)
    const atGoal = await valueNow()
    expect(atGoal).toBeLessThanOrEqual(beforeHome)
    await page.keyboard.press('Shift+ArrowRight')
    await page.keyboard.press('ArrowLeft')
    await expect.poll(valueNow).toBe(atGoal + 9)
    await page.keyboard.press('3')
    expect(await page.getByRole('radio', { name: 'Time per device' }).getAttribute('aria-checked')).toBe(
      'true',
    )
    expect(await valueNow()).toBe(atGoal + 9)
    await page.keyboard.press('Enter')
    await page.getByRole('dialog').waitFor()
    await page.keyboard.type('By keys')
    await page.keyboard.press('Enter')
    await page.getByRole('dialog').waitFor({ state: 'detached' })
    await page
      .getByRole('button', { name: /^By keys/ })
      .first()
      .waitFor()
    await page.keyboard.press('t')
    await page.getByRole('region', { name: 'The chart as a table' }).waitFor()
    await page.keyboard.press('t')
    await page.keyboard.press('Control+e')
    await page.getByRole('dialog').waitFor()
    const [download] = await Promise.all([
      page.waitForEvent('download'),
      (async () => {
        await page.getByRole('button', { name: 'Export', exact: true }).focus()
        await page.keyboard.press('Enter')
      })(),
    ])
    expect(download.suggestedFilename()).toMatch(/\.html$/)
    await page.context().close()
  })
})
