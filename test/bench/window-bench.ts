import type { Page } from 'playwright-core'
import { encodeWire } from '../../app/contract/wire.ts'
import { goTo, startApp } from '../e2e/app.ts'
import { budgetView } from '../helpers/budget-columns.ts'

/**
 * How the Budget screen keeps up in Chromium, by the browser's own observers: dragging the cut, zooming by wheel and
 * scrolling the table, at 1,000, 10,000 and 100,000 patterns. The host is real; only the columns are made up.
 *
 * As a floor, the same moves on a page that only writes one number show what browser and machine take by themselves.
 *
 *   node test/bench/window-bench.ts
 */
const SIZES = [1_000, 10_000, 100_000]
const MOVES = 240

type Measured = {
  /** Milliseconds from a pointer move's own time stamp until sentence and figures were changed. */
  readonly follow: number[]
  /** From its handling until the frame that shows it was drawn. */
  readonly drawn: number[]
  /** Tasks over 50 ms. */
  readonly longTasks: number[]
}

const app = await startApp()
try {
  const page = await app.open({ viewport: { width: 1920, height: 1080 } })
  await page.getByRole('button', { name: 'Open the demo' }).click()
  await page.getByRole('link', { name: 'Budget of run 2' }).waitFor({ timeout: 60_000 })
  const floor = await measure(await barePage(page), () => dragCut(page))
  console.log(`a bare page\n  drag: followed ${summary(floor.follow)}, drawn ${summary(floor.drawn)}`)
  await page.reload()
  for (const patterns of SIZES) {
    await showColumns(page, patterns)
    const drag = await measure(page, () => dragCut(page))
    const zoom = await measure(page, () => turnWheel(page))
    const scroll = await measure(page, () => scrollTable(page))
    console.log(
      [
        `${patterns.toLocaleString('en')} patterns`,
        `drag: followed ${summary(drag.follow)}, drawn ${summary(drag.drawn)}`,
        `long tasks: drag ${list(drag.longTasks)}, zoom ${list(zoom.longTasks)}, scroll ${list(scroll.longTasks)}`,
      ].join('\n  '),
    )
  }
} finally {
  await app.close()
}

/** Puts a box that writes where the pointer is in place of the application. */
async function barePage(page: Page): Promise<Page> {
  await page.evaluate(() => {
    document.body.innerHTML =
      '<div role="slider" style="height:600px"></div><p data-testid="figures"><span>0</span></p>'
    const text = document.querySelector('span')
    window.addEventListener('pointermove', ({ clientX }) => {
      if (text) text.textContent = String(clientX)
    })
  })
  return page
}

async function showColumns(page: Page, patterns: number): Promise<void> {
  await page.unroute('**/api/budgets.view')
  await page.route('**/api/budgets.view', (route) =>
    route.fulfill({
      contentType: 'application/octet-stream',
      body: Buffer.from(encodeWire({ ok: true, value: { view: budgetView(patterns), fieldErrors: [] } })),
    }),
  )
  await goTo(page, '#/tasks')
  await page.getByRole('heading', { level: 1, name: 'Tasks' }).waitFor()
  await goTo(page, '#/products/1/budget')
  await page.getByText(`of ${patterns.toLocaleString('en')} patterns`).waitFor()
  await page.waitForTimeout(800)
}

async function measure(page: Page, act: () => Promise<void>): Promise<Measured> {
  await page.evaluate(() => {
    const measured = { follow: [] as number[], drawn: [] as number[], longTasks: [] as number[] }
    const tasks = new PerformanceObserver((entries) => {
      for (const { duration } of entries.getEntries()) measured.longTasks.push(duration)
    })
    tasks.observe({ type: 'longtask' })
    let moved: { stamp: number; handled: number } | null = null
    const changes = new MutationObserver(() => {
      if (moved === null) return
      const { stamp, handled } = moved
      moved = null
      measured.follow.push(performance.now() - stamp)
      requestAnimationFrame(() => {
        const channel = new MessageChannel()
        channel.port1.onmessage = () => measured.drawn.push(performance.now() - handled)
        channel.port2.postMessage(null)
      })
    })
    const figures = document.querySelector('[data-testid="figures"]')
    if (figures) changes.observe(figures, { subtree: true, characterData: true, childList: true })
    const hear = (event: PointerEvent): void => {
      moved = { stamp: event.timeStamp, handled: performance.now() }
    }
    window.addEventListener('pointermove', hear, { capture: true })
    Object.assign(window, {
      endOfMeasuring: () => {
        tasks.disconnect()
        changes.disconnect()
        window.removeEventListener('pointermove', hear, { capture: true })
        return measured
      },
    })
  })
  await act()
  await page.waitForTimeout(300)
  return page.evaluate(() => (window as unknown as { endOfMeasuring(): Measured }).endOfMeasuring())
}

async function dragCut(page: Page): Promise<void> {
  const box = await page.getByRole('slider').boundingBox()
  if (!box) throw new Error('there is no chart')
  const y = box.y + box.height / 2
  const at = (share: number): number => box.x + 80 + (box.width - 170) * share
  await page.mouse.move(at(0.05), y)
  await page.mouse.down()
  for (let move = 1; move <= MOVES; move++) {
    await page.mouse.move(at(0.5 - 0.45 * Math.cos((4 * Math.PI * move) / MOVES)), y)
  }
  await page.mouse.up()
}

async function turnWheel(page: Page): Promise<void> {
  const box = await page.getByRole('slider').boundingBox()
  if (!box) throw new Error('there is no chart')
  await page.mouse.move(box.x + box.width * 0.3, box.y + box.height * 0.4)
  for (let turn = 0; turn < 120; turn++) await page.mouse.wheel(0, turn % 60 < 30 ? -90 : 90)
}

async function scrollTable(page: Page): Promise<void> {
  const box = await page.getByRole('region', { name: /^Patterns in order/ }).boundingBox()
  if (!box) throw new Error('there is no table')
  await page.mouse.move(box.x + 200, box.y + box.height / 2)
  for (let turn = 0; turn < 120; turn++) await page.mouse.wheel(0, turn % 60 < 30 ? 900 : -900)
}

function summary(values: readonly number[]): string {
  if (values.length === 0) return 'nothing'
  const sorted = [...values].sort((a, b) => a - b)
  const at = (share: number): string => (sorted[Math.floor(share * (sorted.length - 1))] ?? 0).toFixed(1)
  return `${at(0.5)} ms median, ${at(0.95)} at 95 %, ${at(1)} worst of ${sorted.length}`
}

function list(durations: readonly number[]): string {
  return durations.length === 0 ? 'none' : durations.map((each) => `${each.toFixed(0)} ms`).join(', ')
}
