import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { buildFaultList } from '../../app/engine/faults/build-fault-list.ts'
import { readBench } from '../../app/engine/formats/bench/read-bench.ts'
import type { BlockReport } from '../../app/engine/simulate/block-report.ts'
import type { SimulationTask } from '../../app/engine/simulate/simulation.ts'
import { simulateTwin } from '../../app/engine/simulate/twin.ts'
import { simulateInProcess } from '../../app/workers/simulate-in-process.ts'
import {
  createSimulationPool,
  type SimulationCheckpoint,
  type SimulationPool,
  type SimulationProgress,
} from '../../app/workers/simulation-pool.ts'
import { freshKernel } from '../helpers/kernel.ts'
import { randomBench } from '../helpers/random-circuit.ts'
import { randomPatterns } from '../helpers/random-run.ts'
import { randomTask } from '../helpers/random-task.ts'

let kernel: Uint8Array
let pool: SimulationPool
beforeAll(async () => {
  kernel = await freshKernel()
  pool = createSimulationPool({ threads: 2, wasmBytes: kernel })
}, 60_000)
afterAll(() => pool.close())

/** A task that takes a second or two, so that there is time to look at it and to cancel it. */
function longTask(detectionLimit: number): SimulationTask {
  const text = randomBench(7, { inputs: 60, gates: 4000, flipFlops: 100, outputs: 30 })
  const { value } = readBench({ name: 'long.bench', text })
  if (value === null) throw new Error('the random netlist was not read')
  const { circuit } = value
  const patterns = randomPatterns(circuit, 30_000, 7)
  const faults = buildFaultList(circuit)
  return { circuit, faults, patterns, detectionLimit, classes: null, wantMatrix: false }
}

// The reference is the slow simulation, and for long tasks the kernel on one thread, which is checked against it.
describe('a simulation pool', () => {
  test.each([1, 2])('gives the slow simulation’s result on %i threads', async (threads) => {
    for (let seed = 1000; seed < 1020; seed++) {
      const task = randomTask(seed)
      const outcome = await pool.run(task, { threads })
      expect(outcome.state).toBe('done')
      expect(outcome.state === 'done' && outcome.result, `seed ${seed}`).toEqual(simulateTwin(task))
    }
  })

  test.each([0, 1, 3])('splits a long task without a trace, at a limit of %i detections', async (limit) => {
    const task = longTask(limit)
    const expected = simulateInProcess(kernel, task).profile
    const outcome = await pool.run(task)
    expect(outcome.state === 'done' && outcome.result.profile).toEqual(expected)
  })

  test.each([0, 3])('goes on from a checkpoint to the same result, at a limit of %i', async (limit) => {
    const task = longTask(limit)
    const half: SimulationTask = { ...task, patterns: { ...task.patterns, nPatterns: 14_848 } }
    const first = simulateInProcess(kernel, half).profile
    const resumeFrom: SimulationCheckpoint = { patternsDone: 14_848, profile: first }
    const outcome = await pool.run(task, { resumeFrom })
    expect(outcome.state === 'done' && outcome.result.profile).toEqual(
      simulateInProcess(kernel, task).profile,
    )
  })

  test('stops within 200 ms of being cancelled and can then go on', async () => {
    const task = longTask(0)
    const stop = new AbortController()
    const checkpoints: SimulationCheckpoint[] = []
    const progress: SimulationProgress[] = []
    let asked = 0
    const outcome = await pool.run(task, {
      signal: stop.signal,
      onCheckpoint: (checkpoint) => {
        checkpoints.push(checkpoint)
        setTimeout(() => {
          asked = performance.now()
          stop.abort()
        }, 20)
      },
      onProgress: (at) => progress.push(at),
    })
    const waited = performance.now() - asked
    if (outcome.state === 'done') return expect(checkpoints.length).toBeLessThanOrEqual(1)
    expect(waited).toBeLessThan(200)
    expect(outcome.checkpoint).toEqual(checkpoints.at(-1))
    expect(progress.some((at) => at.phase === 'simulating' && at.done > 0 && at.pairsPerSecond > 0)).toBe(
      true,
    )
    const rest = await pool.run(task, { resumeFrom: outcome.checkpoint })
    expect(rest.state === 'done' && rest.result.profile).toEqual(simulateInProcess(kernel, task).profile)
  })

  test('reports what each block detects: bits of hard classes, counts of easy ones', async () => {
    for (let seed = 3000; seed < 3020; seed++) {
      const task: SimulationTask = { ...randomTask(seed), detectionLimit: 0, wantMatrix: true }
      const matrix = simulateTwin(task)?.matrix
      if (!matrix) throw new Error('the slow simulation kept no matrix')
      const rowOf = new Map(Array.from(matrix.classOfRow, (group, row) => [group, row]))
      const words = new Uint32Array(matrix.words.length)
      const counted = new Map<number, number>()
      const onBlock = (block: BlockReport): void => {
        block.hardClasses.forEach((group, at) => {
          const bits = block.hardWords.subarray(at * block.wordsPerRow, (at + 1) * block.wordsPerRow)
          words.set(bits, (rowOf.get(group) ?? -1) * matrix.wordsPerRow + block.firstPattern / 32)
        })
        block.easyClasses.forEach((group, at) => {
          counted.set(group, (counted.get(group) ?? 0) + block.easyCounts[at])
        })
      }
      await pool.run(task, { onBlock, easyFrom: 1000 })
      expect(words, `seed ${seed}`).toEqual(matrix.words)
      const outcome = await pool.run(task, { onBlock, easyFrom: 0 })
      if (outcome.state !== 'done') throw new Error('the run was cancelled')
      const { detections } = outcome.result.profile
      expect(Array.from(matrix.classOfRow, (group) => counted.get(group))).toEqual(
        Array.from(matrix.classOfRow, (group) => detections[group]),
      )
    }
  })

  test('does not begin what was cancelled before', async () => {
    const outcome = await pool.run(longTask(1), { signal: AbortSignal.abort() })
    expect(outcome.state).toBe('cancelled')
  })

  test('takes one run after the other', async () => {
    const tasks = [2000, 2001, 2002].map(randomTask)
    const outcomes = await Promise.all(tasks.map((task) => pool.run(task)))
    const profiles = outcomes.map((outcome) => outcome.state === 'done' && outcome.result.profile)
    expect(profiles).toEqual(tasks.map((task) => simulateTwin(task)?.profile))
  })

  test('rejects the run under way when it is closed', async () => {
    const closing = createSimulationPool({ threads: 2, wasmBytes: kernel })
    const run = closing.run(longTask(0))
    setTimeout(() => void closing.close(), 100)
    await expect(run).rejects.toThrow('threads have stopped')
  })

  test('says so where the kernel does not fit the program', async () => {
    // The smallest module there is (WebAssembly core specification, binary format): magic number and version.
    const empty = Uint8Array.of(0, 0x61, 0x73, 0x6d, 1, 0, 0, 0)
    const broken = createSimulationPool({ threads: 1, wasmBytes: empty })
    await expect(broken.run(randomTask(1))).rejects.toThrow(/kernel/)
    await broken.close()
  })
})
