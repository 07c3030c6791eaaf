import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { goTo, hasChromium, openDemo, startApp, type RunningApp } from './app.ts'
import { violationsOf } from './axe.ts'

const SCREENS = [
  ['Projects', '#/'],
  ['Overview', '#/products/1/product'],
  ['Budget', '#/products/1/budget'],
  ['Faults lost', '#/products/1/faults-lost'],
  ['Money', '#/products/1/money'],
  ['Assumptions', '#/products/1/assumptions'],
  ['Import', '#/products/1/import'],
  ['Testers', '#/testers'],
  ['Tasks', '#/tasks'],
  ['Settings', '#/settings'],
] as const

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
