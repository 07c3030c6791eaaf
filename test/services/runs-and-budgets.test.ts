import { describe, expect, test } from 'vitest'
import {
  adderProject,
  NO_LIMITS,
  testApplication,
  type TestApplication,
} from '../helpers/test-application.ts'

const ASSUMPTIONS = { testerId: null, limits: NO_LIMITS }

async function finishedRun(application: TestApplication): Promise<{ productId: number; runId: number }> {
  const { productId, netlistId, patternSetId } = await adderProject(application)
  const { id: runId } = await application.call('runs.start', { netlistId, patternSetId })
  await application.ended(productId, runId)
  return { productId, runId }
}

describe('runs', () => {
  test('all patterns of a serial adder detect all faults, and tasks and events tell of it', async () => {
    const application = testApplication()
    const told: string[] = []
    application.application.events.subscribe(({ name, payload }) => {
      if (name === 'task' && payload.kind === 'run') told.push(payload.state)
    })
    const { productId, runId } = await finishedRun(application)
    const run = await application.ended(productId, runId)
    // SOURCE: a full adder has no redundant line (common practice, no source), so exhaustive patterns detect all.
    expect(run).toMatchObject({
      state: 'done',
      number: 1,
      patternsDone: 8,
      progress: 1,
      figures: { faults: 32, detected: 32, possibly: 0, coverage: 1 },
    })
    expect(told.at(0)).toBe('queued')
    expect(told.at(-1)).toBe('done')
    const { tasks } = await application.call('tasks.list', {})
    expect(tasks.find(({ kind }) => kind === 'run')).toMatchObject({
      runId,
      message: '32 of 32 faults detected',
    })
  })

  test('a run tells what its patterns have detected so far, in file order', async () => {
    const application = testApplication()
    const { runId } = await finishedRun(application)
    const { detected } = await application.call('runs.curve', { id: runId })
    const { view } = await application.call('budgets.view', {
      runId,
      orders: ['as-delivered'],
      assumptions: ASSUMPTIONS,
    })
    expect(detected).toEqual(view?.orders[0]?.detected)
    expect(await application.call('runs.curve', { id: 999 })).toEqual({ detected: null })
  })

  test('a run that is under way keeps what it needs, and is numbered on after one was deleted', async () => {
    const application = testApplication()
    const { call } = application
    const { productId, netlistId, patternSetId } = await adderProject(application)
    const { id } = await call('runs.start', { netlistId, patternSetId })
    await expect(call('runs.delete', { id })).rejects.toMatchObject({ code: 'in-use' })
    await expect(call('products.delete', { id: productId })).rejects.toMatchObject({ code: 'in-use' })
    await expect(call('netlists.delete', { id: netlistId })).rejects.toMatchObject({ code: 'in-use' })
    await application.ended(productId, id)
    await call('runs.delete', { id })
    expect((await call('runs.start', { netlistId, patternSetId })).number).toBe(2)
  })

  test('a run that was cancelled while it waited can be resumed', async () => {
    const application = testApplication()
    const { call } = application
    const { productId, netlistId, patternSetId } = await adderProject(application)
    const first = await call('runs.start', { netlistId, patternSetId })
    const second = await call('runs.start', { netlistId, patternSetId })
    expect((await call('runs.cancel', { id: second.id })).state).toBe('cancelled')
    await application.ended(productId, first.id)
    await call('runs.resume', { id: second.id })
    expect((await application.ended(productId, second.id)).figures).toMatchObject({ detected: 32 })
  })
})

describe('budgets', () => {
  test('every order ends at what the whole set detects, and the steepest is never below the other', async () => {
    const application = testApplication()
    const { runId } = await finishedRun(application)
    const { view } = await application.call('budgets.view', {
      runId,
      orders: ['as-delivered', 'steepest', 'smallest'],
      assumptions: ASSUMPTIONS,
    })
    expect(view).toMatchObject({ total: 32, faults: 32, base: 'lines', currency: '€' })
    const [delivered, steepest, smallest] = view?.orders ?? []
    for (const order of [delivered, steepest, smallest]) {
      expect(order?.detected.at(0)).toBe(0)
      expect(order?.detected.at(-1)).toBe(32)
      expect([...(order?.pattern ?? [])].sort()).toEqual([1, 2, 3, 4, 5, 6, 7, 8])
    }
    expect(steepest?.detected[1]).toBeGreaterThanOrEqual(delivered?.detected[1] ?? Infinity)
    expect(smallest?.chosen).toBeLessThanOrEqual(steepest?.chosen ?? 0)
    // SOURCE: domain.md, scan: (n + 1) · L shift cycles and n capture cycles; here L = 1.
    expect([...(delivered?.cycles ?? [])]).toEqual([0, 3, 5, 7, 9, 11, 13, 15, 17])
  })

  test('figures that a plan stands on move it at once; what does not fit is named at its field', async () => {
    const application = testApplication()
    const { runId } = await finishedRun(application)
    const view = (assumptions: object) =>
      application.call('budgets.view', {
        runId,
        orders: ['as-delivered'],
        assumptions: { ...ASSUMPTIONS, ...assumptions },
      })
    const slow = await view({ testerValues: { shiftMHz: 10 } })
    const fast = await view({ testerValues: { shiftMHz: 20 } })
    expect(slow.view?.orders[0]?.milliseconds.at(-1)).toBeCloseTo(
      2 * (fast.view?.orders[0]?.milliseconds.at(-1) ?? NaN),
      12,
    )
    for (const [assumptions, key] of [
      [{ testerValues: { sites: 0 } }, 'sites'],
      [{ productValues: { yield: 0 } }, 'yield'],
      [{ weights: 'no weights here' }, 'weights'],
      [{ constraints: { keep: [1], leaveOut: [1] } }, 'constraints.keep'],
    ] as const) {
      expect(await view(assumptions)).toMatchObject({ view: null, fieldErrors: [{ key }] })
    }
  })

  test('an order by hand runs the patterns as they were set; one that can not be is refused', async () => {
    const application = testApplication()
    const { runId } = await finishedRun(application)
    const byHand = (list: number[]) =>
      application.call('budgets.view', {
        runId,
        orders: ['by-hand'],
        assumptions: { ...ASSUMPTIONS, byHand: list },
      })
    const { view } = await byHand([8, 1])
    expect([...(view?.orders[0]?.pattern ?? [])]).toEqual([8, 1, 2, 3, 4, 5, 6, 7])
    expect(await byHand([9])).toMatchObject({ view: null, fieldErrors: [{ key: 'byHand' }] })
    expect(await byHand([2, 2])).toMatchObject({ view: null, fieldErrors: [{ key: 'byHand' }] })
  })

  test('no order is above the ceiling', async () => {
    const application = testApplication()
    const { runId } = await finishedRun(application)
    const { ceiling } = await application.call('budgets.ceiling', { runId, assumptions: ASSUMPTIONS })
    const { view } = await application.call('budgets.view', {
      runId,
      orders: ['as-delivered', 'steepest', 'smallest'],
      assumptions: ASSUMPTIONS,
    })
    expect(ceiling).toHaveLength(9)
    for (const { detected } of view?.orders ?? []) {
      detected.forEach((count, k) => expect(count).toBeLessThanOrEqual(ceiling[k] ?? 0))
    }
  })

  test('a budget keeps its figures, one is in use, and it turns stale with its run', async () => {
    const application = testApplication()
    const { call } = application
    const { productId, runId } = await finishedRun(application)
    const save = (name: string, cut: number) =>
      call('budgets.save', { productId, runId, name, order: 'as-delivered', cut, assumptions: ASSUMPTIONS })
    const first = await save('First', 4)
    const second = await save('Second', 8)
    expect(first).toMatchObject({ inUse: true, stale: false, figures: { patterns: 4, cycles: 9 } })
    expect(second).toMatchObject({ inUse: false, figures: { detected: 32, coverage: 1 } })
    await expect(save('First', 2)).rejects.toMatchObject({ code: 'name-taken' })
    await call('budgets.update', { id: second.id, inUse: true })
    const { budgets } = await call('products.get', { id: productId })
    expect(budgets.map(({ name, inUse }) => [name, inUse])).toEqual([
      ['Second', true],
      ['First', false],
    ])
    await call('runs.delete', { id: runId })
    expect((await call('products.get', { id: productId })).budgets.map(({ stale }) => stale)).toEqual([
      true,
      true,
    ])
  })

  test('faults that a cut loses come with the pattern that brings each back', async () => {
    const application = testApplication()
    const { runId } = await finishedRun(application)
    const input = { runId, order: 'as-delivered' as const, cut: 1, assumptions: ASSUMPTIONS }
    const { lost, rows, blocks } = await application.call('faults.lost', { ...input, count: 2 })
    const { view } = await application.call('budgets.view', {
      runId,
      orders: ['as-delivered'],
      assumptions: ASSUMPTIONS,
    })
    const detected = view?.orders[0]?.detected[1] ?? 0
    expect(lost).toBe(32 - detected)
    expect(blocks).toEqual([{ block: '', faults: 32, detected, lost }])
    expect(rows).toHaveLength(2)
    expect(rows.every(({ pattern, position }) => pattern >= 2 && position === pattern)).toBe(true)
  })

  test('money: sums a year, the least of them, and what a dearer escape and tester would change', async () => {
    const application = testApplication()
    const { runId } = await finishedRun(application)
    const assumptions = {
      ...ASSUMPTIONS,
      productValues: { yield: 0.9, shippedPerYear: 1e6, escapeCost: 40 },
      limits: { maxMilliseconds: null, minCoverage: 0.5, maxDppm: null },
    }
    const subject = { runId, order: 'as-delivered' as const, cut: 2, assumptions }
    const money = await application.call('budgets.money', subject)
    const total = money.totalPerYear ?? new Float64Array()
    expect(total).toHaveLength(money.patterns + 1)
    expect(money.leastTotalCut).toBe(total.indexOf(Math.min(...total)))
    expect(money.wantedCut).toBeLessThanOrEqual(money.patterns)

    // Both costs are proportional to their price: tested devices x time x rate, shipped x DPPM x cost of an escape.
    const [test, escapes] = [money.testCostPerYear?.[2] ?? NaN, money.escapeCostPerYear?.[2] ?? NaN]
    expect(escapes).toBeCloseTo((1e6 * money.at.dppm * 40) / 1e6, 6)
    const row = (input: string) => money.sensitivity.find((each) => each.input === input)
    expect(row('escapeCost')?.low).toMatchObject({ value: 32, dppm: money.at.dppm })
    expect(row('escapeCost')?.high.totalPerYear).toBeCloseTo(test + 1.2 * escapes, 6)
    expect(row('costPerHour')?.low.totalPerYear).toBeCloseTo(0.8 * test + escapes, 6)
    expect(
      money.narrowings.every(({ low, high }) => low >= money.at.dppmLow && high <= money.at.dppmHigh),
    ).toBe(true)
  })

  test.each(['html', 'csv', 'pdf', 'xlsx', 'vectors', 'patterns-csv', 'stil'] as const)(
    'an export as %s has the form of its kind',
    async (format) => {
      const application = testApplication()
      const { runId } = await finishedRun(application)
      const made = await application.call('exports.make', {
        runId,
        order: 'as-delivered',
        cut: 3,
        assumptions: ASSUMPTIONS,
        format,
      })
      const start = new TextDecoder('latin1').decode(made.bytes.subarray(0, 200))
      // SOURCE: ISO 32000 (%PDF-), APPNOTE of ZIP (PK), IEEE 1450 (STIL 1.0), HTML (doctype).
      const signs = { html: /^<!doctype html>/i, pdf: /^%PDF-/, xlsx: /^PK/, stil: /^STIL 1\.0/ } as const
      expect(start).toMatch(format in signs ? signs[format as keyof typeof signs] : /./)
      expect(made.fileName).toMatch(/^Adder All 3 patterns\.\w+$/)
      if (format !== 'vectors') return
      const lines = new TextDecoder().decode(made.bytes).split('\n')
      // SOURCE: a full adder by hand: a b carry, then sum and next carry.
      expect(lines.filter((line) => line !== '' && !line.startsWith('#'))).toEqual([
        '000 LL',
        '001 HL',
        '010 HL',
      ])
    },
  )
})
