import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { InputOf, OperationName, OutputOf } from '../../app/contract/operations.ts'
import type { Result } from '../../app/contract/errors.ts'
import type { Run } from '../../app/contract/shapes/run.ts'
import { decodeWire, encodeWire } from '../../app/contract/wire.ts'
import { root, startApp, type RunningApp } from './app.ts'

/** So many copies of the set that a run takes some seconds. */
const COPIES = 150

describe('a host that is killed in the middle of a run', () => {
  let app: RunningApp
  beforeAll(async () => {
    app = await startApp()
  })
  afterAll(() => app.close())

  async function call<N extends OperationName>(name: N, input: InputOf<N>): Promise<OutputOf<N>> {
    const url = new URL(app.url)
    const response = await fetch(new URL(`/api/${name}`, url), {
      method: 'POST',
      headers: { 'x-tallycut-token': url.searchParams.get('token') ?? '' },
      body: encodeWire(input),
    })
    const result = decodeWire(new Uint8Array(await response.arrayBuffer())) as Result<OutputOf<N>>
    if (!result.ok) throw new Error(result.error.message)
    return result.value
  }

  async function runWhen(productId: number, runId: number, holds: (run: Run) => boolean): Promise<Run> {
    for (;;) {
      const { runs } = await call('products.get', { id: productId })
      const run = runs.find(({ id }) => id === runId)
      if (run && holds(run)) return run
      await new Promise((again) => setTimeout(again, 20))
    }
  }

  async function addFile(name: string, text: string): Promise<string> {
    return (await call('files.add', { name, bytes: new TextEncoder().encode(text) })).fileId
  }

  it('has lost nothing when it is started again: the run resumes and ends as one that was never disturbed', async () => {
    const asset = (name: string): string => readFileSync(join(root, 'assets/demo', name), 'utf8')
    const { path } = await call('projects.create', { name: 'Rough ride' })
    const { id: productId } = await call('products.create', { name: 'Fern' })
    const netlistFile = await addFile('fern.bench', asset('fern.bench'))
    const { inspectionId } = await call('netlists.inspect', { fileIds: [netlistFile] })
    const { id: netlistId } = await call('netlists.save', { productId, inspectionId, name: 'r1' })
    const setFile = await addFile('long.vec', asset('fern-b.vec').repeat(COPIES))
    const read = await call('patternSets.inspect', { netlistId, fileIds: [setFile] })
    const set = await call('patternSets.save', { productId, inspectionId: read.inspectionId, name: 'long' })
    const start = { netlistId, patternSetId: set.id, detectionLimit: 0 }

    const { id: runId } = await call('runs.start', start)
    const before = await runWhen(
      productId,
      runId,
      ({ patternsDone, state }) => patternsDone > 0 || state === 'done',
    )
    expect(before.state).toBe('running')
    await app.restart('SIGKILL')

    await call('projects.open', { path })
    const broken = await runWhen(productId, runId, () => true)
    expect(broken.state).toBe('interrupted')
    expect(broken.patternsDone).toBeGreaterThanOrEqual(before.patternsDone)
    await call('runs.resume', { id: runId })
    const resumed = await runWhen(productId, runId, ({ state }) => state === 'done' || state === 'failed')
    const { id: wholeId } = await call('runs.start', start)
    const whole = await runWhen(productId, wholeId, ({ state }) => state === 'done' || state === 'failed')
    expect([resumed.state, whole.state]).toEqual(['done', 'done'])
    expect(resumed.figures).toEqual(whole.figures)

    const curveOf = async (id: number) => {
      const limits = { maxMilliseconds: null, minCoverage: null, maxDppm: null }
      const { view } = await call('budgets.view', {
        runId: id,
        orders: ['as-delivered', 'steepest'],
        assumptions: { testerId: null, limits },
      })
      return view?.orders.map(({ detected, pattern, detectsAlone }) => [detected, pattern, detectsAlone])
    }
    expect(await curveOf(runId)).toEqual(await curveOf(wholeId))
  })
})
