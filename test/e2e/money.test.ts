import type { Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { goTo, hasChromium, openDemo, startApp, type RunningApp } from './app.ts'

describe.skipIf(!hasChromium)('the Money screen', () => {
  let app: RunningApp
  let page: Page
  beforeAll(async () => {
    app = await startApp()
    page = await app.open()
    await openDemo(page)
    await goTo(page, '#/products/1/money')
    await page.getByTestId('answer').waitFor()
  })
  afterAll(() => app.close())

  const slider = () => page.getByRole('slider')
  const cutNow = async (): Promise<number> => Number(await slider().getAttribute('aria-valuenow'))

  it('puts the cut where the pointer is, and Budget has it there too', async () => {
    const box = await slider().boundingBox()
    if (box === null) throw new Error('the chart has no box')
    await page.mouse.click(box.x + box.width * 0.4, box.y + box.height / 2)
    const cut = await cutNow()
    expect(await page.getByTestId('answer').textContent()).toMatch(new RegExp(`^${cut} patterns cost €`))
    await page.getByRole('button', { name: 'Back to the cut' }).click()
    await page.getByRole('heading', { level: 1, name: 'Budget' }).waitFor()
    await expect.poll(cutNow).toBe(cut)
    await goTo(page, '#/products/1/money')
    await page.getByTestId('answer').waitFor()
    await expect.poll(cutNow).toBe(cut)
  })

  it('goes to the least total by Home, and says so', async () => {
    await slider().focus()
    await page.keyboard.press('Home')
    await expect
      .poll(() => page.getByTestId('answer').textContent())
      .toMatch(/No other cut of this order costs less\.$/)
  })

  it('takes a range of the user’s own, and refuses a wrong one beside the field', async () => {
    const range = page.getByLabel('Range of cost of an escape')
    const before = await page.getByRole('row', { name: /Cost of an escape/ }).textContent()
    await range.fill('0.1 to 100')
    await page.keyboard.press('Tab')
    await expect
      .poll(() => page.getByRole('row', { name: /Cost of an escape/ }).textContent())
      .not.toBe(before)
    await range.fill('100 to 0.1')
    await page.keyboard.press('Tab')
    await page.getByText('two numbers, the lower first').waitFor()
    expect(await range.inputValue()).toBe('100 to 0.1')
  })

  it('shows times or costs with other equipment', async () => {
    const grid = page.getByRole('table', { name: 'Sites by multi-site efficiency' })
    const times = await grid.textContent()
    await page.getByRole('radio', { name: 'Cost', exact: true }).click()
    expect(await grid.textContent()).not.toBe(times)
  })
})
