import { writeFileSync } from 'node:fs'
import { join } from 'node:path'
import type { Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { goTo, hasChromium, importFiles, openDemo, startApp, type RunningApp } from './app.ts'
import { violationsOf } from './axe.ts'

/** Drops a text file on the window as a file manager does. */
async function dropFile(page: Page, name: string, text: string): Promise<void> {
  const transfer = await page.evaluateHandle(
    ([fileName, content]) => {
      const data = new DataTransfer()
      data.items.add(new File([content], fileName))
      return data
    },
    [name, text] as const,
  )
  await page.dispatchEvent('body', 'dragover', { dataTransfer: transfer })
  await page.dispatchEvent('body', 'drop', { dataTransfer: transfer })
}

const closeDialog = async (page: Page): Promise<void> => {
  await page.keyboard.press('Escape')
  await page.getByRole('dialog').waitFor({ state: 'detached' })
}

describe.skipIf(!hasChromium)('the window', () => {
  let app: RunningApp
  let page: Page
  beforeAll(async () => {
    app = await startApp()
    page = await app.open()
  })
  afterAll(() => app.close())

  it('makes a project and a product around a netlist that is dropped on the first screen', async () => {
    await dropFile(page, 'sage.bench', 'INPUT(a)\nINPUT(b)\nOUTPUT(y)\ny = NAND(a, b)\n')
    await page.getByRole('heading', { level: 1, name: 'Import' }).waitFor()
    expect(await page.getByLabel('into').locator('option:checked').textContent()).toBe('sage')
    await page.getByRole('button', { name: 'Save netlist' }).click()
    await page.getByText('Netlist sage is saved.').waitFor()
    expect(await page.title()).toBe('Import – sage – Tallycut')
  })

  it('proposes names that are free, and a place for files of another product', async () => {
    await dropFile(page, 'sage.bench', 'INPUT(a)\nOUTPUT(y)\ny = NOT(a)\n')
    await page.getByLabel('Save as revision').waitFor()
    expect(await page.getByLabel('Save as revision').inputValue()).toBe('sage 2')
    await page.getByLabel('into').selectOption('a new product')
    await page.getByRole('link', { name: 'sage 2', exact: true }).waitFor()
  })

  it('keeps a refused value beside its reason, and saves nothing on the way to it', async () => {
    await openDemoAt('#/products/1/assumptions')
    const yields = page.getByLabel('Yield', { exact: true })
    await yields.fill('')
    await yields.pressSequentially('1.7')
    await page.getByText('Yield is 1.7; a number above 0 and up to 1 is expected.').waitFor()
    await page.keyboard.press('Tab')
    expect(await yields.inputValue()).toBe('1.7')
    await goTo(page, '#/products/1/product')
    await page.getByRole('link', { name: /^91\.0/ }).waitFor()
  })

  it('prices what is typed at once, and says what it was before', async () => {
    await goTo(page, '#/testers')
    const sites = page.getByLabel('Sites', { exact: true })
    await sites.waitFor()
    await page.getByText('Fern at').first().waitFor()
    await sites.fill('8')
    await page
      .getByText(/^was .*ms$/)
      .first()
      .waitFor()
    await sites.fill('4')
    await page
      .getByText(/^was .*ms$/)
      .first()
      .waitFor({ state: 'detached' })
  })

  it('goes through its regions with F6, and back through screens', async () => {
    await goTo(page, '#/products/1/product')
    await page.getByRole('heading', { name: 'Runs' }).waitFor()
    await page.evaluate(() => (document.activeElement as HTMLElement | null)?.blur())
    const names: string[] = []
    for (let at = 0; at < 4; at += 1) {
      await page.keyboard.press('F6')
      names.push(
        await page.evaluate(
          () => document.activeElement?.closest('[data-region]')?.className.split(' ')[0] ?? 'none',
        ),
      )
    }
    expect(new Set(names).size).toBe(4)
    await goTo(page, '#/tasks')
    await page.getByRole('heading', { level: 1, name: 'Tasks' }).waitFor()
    await page.goBack()
    await page.getByRole('heading', { level: 1, name: 'Fern' }).waitFor()
  })

  it('keeps notes of revisions', async () => {
    await page.getByRole('button', { name: 'Set B', exact: true }).click()
    await page.getByRole('dialog').getByLabel('Note').fill('From the second tape')
    await page.getByRole('button', { name: 'Save', exact: true }).click()
    await page.getByRole('dialog').waitFor({ state: 'detached' })
    await page.locator('[title="From the second tape"]').waitFor()
  })

  it('puts the cut where the pointer is, however large everything is shown', async () => {
    const handleAfterPress = async (share: number): Promise<number> => {
      const box = (await page.getByRole('slider').boundingBox()) ?? { x: 0, y: 0, width: 0, height: 0 }
      const x = box.x + box.width * share
      await page.keyboard.down('Alt')
      await page.mouse.click(x, box.y + box.height / 2)
      await page.keyboard.up('Alt')
      const handle = await page.getByRole('slider').locator('.handle').boundingBox()
      return (handle?.x ?? 0) + (handle?.width ?? 0) / 2 - x
    }
    for (const size of ['1.5', '1']) {
      await goTo(page, '#/settings')
      await page.getByLabel('Size of everything').selectOption(size)
      await goTo(page, '#/products/1/budget')
      await page.getByTestId('answer').waitFor()
      // A pattern is less than 2 pixels wide here.
      expect(Math.abs(await handleAfterPress(0.3))).toBeLessThan(3)
      expect(Math.abs(await handleAfterPress(0.6))).toBeLessThan(3)
    }
    await goTo(page, '#/products/1/product')
    await page.getByRole('heading', { level: 1, name: 'Fern' }).waitFor()
  })

  it('has nothing for axe to find in its dialogs and in states that are not usual', async () => {
    const found: Record<string, string[]> = {}
    const look = async (name: string): Promise<void> => {
      const list = await violationsOf(page)
      if (list.length > 0) found[name] = list
    }
    for (const [button, name] of [
      ['New run…', 'New run'],
      ['Set A', 'Name and note'],
    ] as const) {
      await page.getByRole('button', { name: button, exact: true }).click()
      await page.getByRole('dialog').waitFor()
      await look(name)
      await closeDialog(page)
    }
    await page.keyboard.press('Control+e')
    await page.getByRole('dialog').waitFor()
    await look('Export')
    await closeDialog(page)
    await page.getByRole('button', { name: 'Delete run 1' }).click()
    await page.getByRole('button', { name: 'Undo' }).waitFor()
    await look('Notice')
    await page.getByRole('button', { name: 'Undo' }).click()
    const broken = join(app.folder, 'broken.bench')
    writeFileSync(broken, 'INPUT(a)\nOUTPUT(y)\ny = NADN(a, b)\n')
    await goTo(page, '#/products/1/import')
    await importFiles(page, [broken])
    await page.getByText('What needs a look').waitFor()
    await look('Import with an error')
    await goTo(page, '#/products/99/product')
    await page.getByText("This product can't be shown").waitFor()
    await look('A product that is not there')
    expect(found).toEqual({})
  })

  async function openDemoAt(hash: string): Promise<void> {
    await goTo(page, '#/')
    await openDemo(page)
    await goTo(page, hash)
  }
})
