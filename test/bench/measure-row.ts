// Measures one row of the bench in a process of its own, so that its peak memory is its own. Prints one JSON object.
import { mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { buildFaultList } from '../../app/engine/faults/build-fault-list.ts'
import { readBench } from '../../app/engine/formats/bench/read-bench.ts'
import type { DetectionProfile } from '../../app/engine/simulate/detection-profile.ts'
import type { SimulationTask } from '../../app/engine/simulate/simulation.ts'
import { simulateTwin } from '../../app/engine/simulate/twin.ts'
import { createSimulationPool } from '../../app/workers/simulation-pool.ts'
import { benchPatterns } from './bench-patterns.ts'
import { median, type RowOrder, type RowResult } from './bench-row.ts'
import { CIRCUITS, MILLION } from './circuits.ts'
import { disagreements, runYardstick, writeYardstickFiles } from './yardstick.ts'

const root = join(import.meta.dirname, '../..')
const order = JSON.parse(process.argv[2] ?? '') as RowOrder
const pool = createSimulationPool({
  threads: Math.max(2, order.threads),
  wasmBytes: readFileSync(join(root, 'out/kernel/kernel.wasm')),
})
const folder = mkdtempSync(join(tmpdir(), 'tallycut-bench-'))
try {
  process.stdout.write(JSON.stringify(await measure()))
} finally {
  rmSync(folder, { recursive: true })
  await pool.close()
}

async function measure(): Promise<RowResult> {
  const chosen = [...CIRCUITS, MILLION].find(({ name }) => name === order.circuit)
  if (!chosen) throw new Error(`the bench has no circuit ${order.circuit}`)
  const text = chosen.text()
  const { value } = readBench({ name: chosen.name, text })
  if (value === null) throw new Error(`${chosen.name} can't be read`)
  const { circuit } = value
  const faults = buildFaultList(circuit)
  const patterns = benchPatterns(circuit, order.nPatterns, order.mode.endsWith('X') ? 0.01 : 0)
  const task: SimulationTask = {
    circuit,
    faults,
    patterns,
    detectionLimit: order.mode === 'first detection' ? 1 : order.mode === 'up to 10' ? 10 : 0,
    classes: null,
    wantMatrix: order.mode === 'matrix',
  }
  const simulate = async (
    threads: number,
  ): Promise<{ seconds: number; bytes: number; profile: DetectionProfile }> => {
    const outcome = await pool.run(task, { threads })
    if (outcome.state !== 'done') throw new Error('the simulation was cancelled')
    return { seconds: outcome.kernelSeconds, bytes: outcome.memoryBytes, profile: outcome.result.profile }
  }

  const withYardstick = order.yardstick && order.mode !== 'matrix' && order.threads === 1
  const files = withYardstick ? writeYardstickFiles(folder, text, patterns) : null
  const ours: number[] = []
  const single: number[] = []
  const theirs: number[] = []
  let last = await simulate(order.threads)
  for (let run = 0; run < order.runs; run++) {
    last = await simulate(order.threads)
    ours.push(last.seconds)
    if (order.threads > 1) single.push((await simulate(1)).seconds)
    if (files) theirs.push(runYardstick(files, task.detectionLimit, run === 0))
  }
  const pairs = faults.nFaults * order.nPatterns
  const seconds = median(ours)
  return {
    gates: circuit.order.length,
    faults: faults.nFaults,
    classes: faults.nClasses,
    seconds,
    pairsPerSecond: pairs / seconds,
    peakMegabytes: process.resourceUsage().maxRSS / 1024,
    kernelMegabytes: last.bytes / 2 ** 20,
    toYardstick: files ? median(theirs) / seconds : null,
    toOneThread: order.threads > 1 ? median(single) / seconds : null,
    toTwin: pairs / seconds / twinPairsPerSecond(task),
    agrees: files ? disagreements(files, faults, last.profile).length === 0 : null,
  }
}

/** The slow simulation's speed, on the first 32 patterns and few classes spread over the list. */
function twinPairsPerSecond(task: SimulationTask): number {
  const sample = Math.min(task.faults.nClasses, task.circuit.nNets > 100_000 ? 4 : 40)
  const step = Math.floor(task.faults.nClasses / sample)
  const classes = Uint32Array.from({ length: sample }, (_, at) => at * step)
  const nPatterns = Math.min(32, task.patterns.nPatterns)
  const started = performance.now()
  simulateTwin({ ...task, classes, wantMatrix: false, patterns: { ...task.patterns, nPatterns } })
  const seconds = (performance.now() - started) / 1000
  const uncollapsed = (sample * task.faults.nFaults) / task.faults.nClasses
  return (uncollapsed * nPatterns) / seconds
}
