import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Page } from 'playwright-core'
import { goTo, hasChromium, openDemo, startApp, type RunningApp } from './app.ts'
import { violationsOf } from './axe.ts'

describe.skipIf(!hasChromium)('constraints, weights and better choices in the window', () => {
  let app: RunningApp
  let page: Page
  beforeAll(async () => {
    app = await startApp()
    page = await app.open()
    await openDemo(page)
    await goTo(page, '#/products/1/budget')
    await page.getByTestId('answer').waitFor()
  })
  afterAll(() => app.close())

  const state = async (): Promise<string> => (await page.getByTestId('state').textContent()) ?? ''
  const patterns = (): Promise<string[]> => page.locator('tr.pattern td:nth-child(2)').allTextContents()
  const table = () => page.getByRole('region', { name: /^Patterns in order/ })
  const type = async (value: string): Promise<void> => {
    const field = page.getByRole('textbox', { name: 'Patterns', exact: true })
    await field.fill(value)
    await field.press('Enter')
  }
  const settled = () => expect.poll(() => page.getByTestId('figures').getAttribute('aria-busy')).toBe('false')
  const setConstraints = () => page.getByRole('button', { name: 'Set constraints', exact: true }).click()

  it('names a circle at its field, then holds what is set, says what it costs, and takes it back', async () => {
    await page.getByRole('button', { name: 'Set constraints…' }).click()
    await page.getByLabel('Keep').fill('3, 10-20')
    await page.getByLabel('Run before').fill('3 before 7\n7 before 3')
    await setConstraints()
    await page.getByText('These constraints go in a circle: 3 before 7, 7 before 3.').waitFor()
    expect(await violationsOf(page)).toEqual([])
    await page.getByLabel('Run before').fill('3 before 7')
    await page.getByLabel('Leave out').fill('2000')
    await setConstraints()
    await page.getByText('There is no pattern 2000: they are numbered from 1 to 1000.').waitFor()
    await page.getByLabel('Leave out').fill('41')
    await setConstraints()
    await page.getByRole('dialog').waitFor({ state: 'detached' })
    await expect.poll(state).toContain('Constraints in force: 12 kept, 1 left out, 1 pair in order.')
    await page.getByText(/^Keeping 12 patterns costs/).waitFor()
    await type('5')
    expect(await state()).toContain('Against the constraints, which the cut at 12 patterns keeps.')
    await type('1000')
    await expect.poll(async () => (await patterns()).at(-1)).toBe('41')
    await table().press('Control+z')
    await expect.poll(state).not.toContain('Constraints in force')
    await table().press('Control+Shift+z')
    await expect.poll(state).toContain('Constraints in force')
    await table().press('Control+z')
    await expect.poll(state).not.toContain('Constraints in force')
  })

  it('imposes rules on a pattern from its row, by pointer and by keys', async () => {
    await type('50')
    await expect.poll(() => page.locator('tr.last td:first-child').allTextContents()).toEqual(['50'])
    await settled()
    const pattern = await page.locator('tr.last td:nth-child(2)').textContent()
    await page.locator('tr.last').click({ button: 'right' })
    await page.getByRole('menu').waitFor()
    expect(await violationsOf(page)).toEqual([])
    await page.getByRole('menuitemcheckbox', { name: 'Leave out' }).click()
    await expect.poll(state).toContain('1 left out')
    await table().press('Control+z')
    await expect.poll(state).not.toContain('left out')
    await settled()
    expect(await page.locator('tr.last td:nth-child(2)').textContent()).toBe(pattern)

    await table().focus()
    await page.keyboard.press('k')
    await expect.poll(state).toContain('1 kept')
    await expect
      .poll(
        async () =>
          (await page.getByRole('button', { name: `Rules of pattern ${pattern}` }).count()) > 0 ||
          (await patterns()).includes(pattern ?? ''),
      )
      .toBe(true)
    await page.keyboard.press('Shift+F10')
    await page.getByRole('menu').waitFor()
    await page.keyboard.press('ArrowDown')
    await page.keyboard.press('Escape')
    await page.getByRole('menu').waitFor({ state: 'detached' })
    await page.keyboard.press('Control+z')
    await expect.poll(state).not.toContain('1 kept')
  })

  it('finds a better choice, says what it gained and takes it over', async () => {
    await type('80')
    await settled()
    const before = await page.getByTestId('figures').textContent()
    await page.getByRole('button', { name: 'Improve at this cut…' }).click()
    await page.getByRole('dialog').getByLabel('Time limit').fill('0')
    await page.getByRole('button', { name: 'Look for a better choice' }).click()
    await page.getByText('Type how many seconds it may take, 1 to 3,600.').waitFor()
    await page.getByRole('dialog').getByLabel('Time limit').fill('10')
    await page.getByRole('button', { name: 'Look for a better choice' }).click()
    await page
      .getByText(/^80 patterns detect [\d,]+ faults: \d+ more than choosing the steepest first\./)
      .waitFor({ timeout: 30_000 })
    expect(await violationsOf(page)).toEqual([])
    await page.getByRole('button', { name: 'Take over as the order by hand' }).click()
    await expect.poll(() => page.getByLabel('Order', { exact: true }).inputValue()).toBe('by-hand')
    expect(await page.getByRole('slider').getAttribute('aria-valuenow')).toBe('80')
    expect(await page.getByTestId('figures').textContent()).not.toBe(before)
    await table().press('Control+z')
    await expect.poll(() => page.getByLabel('Order', { exact: true }).inputValue()).toBe('steepest')
    await expect.poll(() => page.getByTestId('figures').textContent()).toBe(before)
  })

  it('ends the search for the smallest complete set where asked, with what was shown before', async () => {
    await page.getByLabel('Order', { exact: true }).selectOption('smallest')
    await page.getByRole('button', { name: 'Cancel the search for the smallest complete set' }).click()
    await expect.poll(() => page.getByLabel('Order', { exact: true }).inputValue()).toBe('steepest')
    await settled()
    expect(await page.getByRole('slider').getAttribute('aria-valuenow')).toBe('80')
  })

  it('proves ceilings that say what they count', async () => {
    await page.getByLabel('Detections a fault needs').fill('3')
    await page.getByLabel('Detections a fault needs').press('Enter')
    await expect.poll(() => page.getByTestId('answer').textContent()).toContain('detected 3 times or more')
    await page.getByRole('button', { name: 'Prove the ceiling' }).click()
    await page.getByRole('button', { name: 'Ceiling, 3 times' }).waitFor({ timeout: 60_000 })
    expect(await state()).toMatch(
      /No choice of 80 of these patterns can detect more than [\d,]+ faults 3 times or more/,
    )
    await page.getByLabel('Detections a fault needs').fill('1')
    await page.getByLabel('Detections a fault needs').press('Enter')
  })

  it('reads weights from a CSV file, and shows weighted and plain coverage side by side', async () => {
    await page.getByRole('button', { name: 'Set weights…' }).click()
    const file = (text: string) => ({ name: 'weights.csv', mimeType: 'text/csv', buffer: Buffer.from(text) })
    await page.getByLabel('Weights file').setInputFiles(file('block,weight\nn1,-3\n'))
    await page.getByRole('button', { name: 'Set weights', exact: true }).click()
    await page.getByText(/^Line 2: /).waitFor()
    expect(await violationsOf(page)).toEqual([])
    await page.getByLabel('Weights file').setInputFiles(file('block,weight\nnowhere,2\nmultiply,5\n'))
    await page.getByRole('button', { name: 'Set weights', exact: true }).click()
    await page.getByText('Weighted coverage', { exact: true }).waitFor()
    expect(await page.getByText('Plain coverage', { exact: true }).isVisible()).toBe(true)
    expect(await page.getByText('Weights: Line 2: nothing in the netlist is called').isVisible()).toBe(true)
    await table().press('Control+z')
    await page.getByText('Weighted coverage', { exact: true }).waitFor({ state: 'detached' })
  })

  it('a budget keeps all of it and shows it again exactly', async () => {
    await page.getByRole('button', { name: 'Set constraints…' }).click()
    await page.getByLabel('Keep').fill('3, 10-20')
    await setConstraints()
    await expect.poll(state).toContain('12 kept')
    await page.getByLabel('Detections a fault needs').fill('2')
    await page.getByLabel('Detections a fault needs').press('Enter')
    await expect.poll(() => page.getByTestId('answer').textContent()).toContain('2 times or more')
    await table().press('Shift+ArrowUp')
    await expect.poll(() => page.getByLabel('Order', { exact: true }).inputValue()).toBe('by-hand')
    await settled()
    const shown = async () => [
      await page.getByTestId('answer').textContent(),
      await state(),
      await page.getByTestId('figures').textContent(),
      await page.locator('tr.last').textContent(),
      await page.getByLabel('Order', { exact: true }).inputValue(),
      await page.getByRole('slider').getAttribute('aria-valuenow'),
    ]
    await expect.poll(() => page.locator('tr.last td:first-child').allTextContents()).toEqual(['79'])
    const kept = await shown()
    await page.getByRole('button', { name: 'Keep as budget' }).click()
    await page.getByLabel('Name').fill('All of it')
    await page.keyboard.press('Enter')
    await page.getByRole('button', { name: /^All of it/ }).waitFor()
    await page.reload()
    await page.getByTestId('answer').waitFor()
    await page.getByLabel('Order', { exact: true }).selectOption('steepest')
    await page.getByRole('button', { name: 'Set constraints…' }).click()
    await page.getByRole('button', { name: 'Clear all' }).click()
    await setConstraints()
    await expect.poll(state).not.toContain('12 kept')
    await page.getByRole('button', { name: /^All of it/ }).click()
    await expect.poll(shown).toEqual(kept)
  })
})
