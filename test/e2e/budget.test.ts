import { readFileSync } from 'node:fs'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Page } from 'playwright-core'
import { goTo, hasChromium, startApp, type RunningApp } from './app.ts'

describe.skipIf(!hasChromium)('the Budget screen', () => {
  let app: RunningApp
  let page: Page
  beforeAll(async () => {
    app = await startApp()
    page = await app.open()
    await page.getByRole('button', { name: 'Open the demo' }).click()
    await page.getByRole('link', { name: 'Budget of run 2' }).waitFor({ timeout: 60_000 })
    await goTo(page, '#/products/1/budget')
    await page.getByTestId('answer').waitFor()
  })
  afterAll(() => app.close())

  const cut = async (): Promise<number> =>
    Number(await page.getByRole('slider').getAttribute('aria-valuenow'))
  const type = async (value: string): Promise<void> => {
    const field = page.getByRole('textbox', { name: 'Patterns', exact: true })
    await field.fill(value)
    await field.press('Enter')
  }
  const positions = (): Promise<string[]> => page.locator('tr.pattern td:first-child').allTextContents()

  it('puts the cut back with Esc during a drag', async () => {
    await type('50')
    const box = (await page.getByRole('slider').boundingBox())!
    await page.mouse.move(box.x + 500, box.y + 100)
    await page.mouse.down()
    await page.mouse.move(box.x + 560, box.y + 100)
    expect(await cut()).not.toBe(50)
    await page.keyboard.press('Escape')
    await page.mouse.up()
    expect(await cut()).toBe(50)
  })

  it('keeps the cut while the axis changes', async () => {
    for (const name of ['Tester cycles', 'Time per device', 'Cost per device', 'Patterns']) {
      await page.getByRole('radio', { name }).click()
      expect(await cut()).toBe(50)
    }
  })

  it('says what is wrong with a cut that can not be', async () => {
    await type('1,001')
    expect(await page.getByText('Type a whole number from 0 to 1,000.').isVisible()).toBe(true)
    expect(await cut()).toBe(50)
  })

  it('says by how much a limit is broken', async () => {
    const field = page.getByLabel('Time limit')
    await field.fill('1.4')
    await field.press('Enter')
    await page.getByText('1.40 ms limit').waitFor()
    await type('400')
    expect(await page.getByTestId('state').textContent()).toMatch(/Over the time limit by [\d.]+\sms/)
    await page.getByRole('slider').press('End')
    expect(await page.getByTestId('state').textContent()).not.toContain('Over the time limit')
    await field.fill('-3')
    await field.press('Enter')
    expect(await page.getByText('Time limit: a number above 0, or empty for none.').isVisible()).toBe(true)
    await field.fill('')
    await field.press('Enter')
    await page.getByText('1.40 ms limit').waitFor({ state: 'detached' })
  })

  it('shows the rows around the cut, and puts the cut where a row is pressed', async () => {
    await type('600')
    await expect.poll(positions).toContain('600')
    await page.locator('tr.pattern', { hasText: /^603/ }).click()
    expect(await cut()).toBe(603)
    await page.getByRole('region', { name: /^Patterns in order/ }).press('ArrowUp')
    expect(await cut()).toBe(602)
  })

  it('sorts and finds patterns', async () => {
    await page.getByRole('button', { name: 'Gain, faults' }).click()
    await page.getByRole('region', { name: /^Patterns in order/ }).evaluate((box) => box.scrollTo(0, 0))
    await expect.poll(async () => (await positions())[0]).toBe('1')
    await page.getByLabel('Find a pattern by its number').fill('777')
    await expect.poll(async () => (await positions()).length).toBe(1)
    await page.getByLabel('Find a pattern by its number').fill('')
    await page.getByRole('button', { name: /^Position/ }).click()
  })

  it('makes the order one set by hand when a pattern is moved', async () => {
    await type('20')
    await page.getByRole('region', { name: /^Patterns in order/ }).press('Shift+ArrowUp')
    await page.getByRole('button', { name: 'By hand' }).waitFor()
    expect(await page.getByLabel('Order', { exact: true }).inputValue()).toBe('by-hand')
    expect(await cut()).toBe(19)
    await page.getByLabel('Order', { exact: true }).selectOption('steepest')
  })

  it('saves the chart as a picture with its title, and its data', async () => {
    const save = async (entry: string): Promise<string> => {
      await page.getByRole('button', { name: /^More/ }).click()
      const [download] = await Promise.all([
        page.waitForEvent('download'),
        page.getByText(entry, { exact: true }).click(),
      ])
      return download.path()
    }
    const svg = readFileSync(await save('Save the chart as SVG'), 'utf8')
    expect(svg).toContain('Fern')
    expect(svg).not.toContain('var(--')
    // SOURCE: PNG specification, signature and width in the IHDR chunk.
    const png = readFileSync(await save('Save the chart as PNG'))
    expect(png.subarray(1, 4).toString()).toBe('PNG')
    const width = Number(/width="([\d.]+)"/.exec(svg)?.[1])
    expect(png.readUInt32BE(16)).toBe(2 * width)
    const rows = readFileSync(await save("Save the chart's data as CSV"), 'utf8')
      .trim()
      .split('\r\n')
    expect(rows).toHaveLength(1002)
  })
})
