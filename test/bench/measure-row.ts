// Measures one row of the bench in a process of its own, so that its peak memory is its own. Prints one JSON object.
import { execFileSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { buildFaultList } from '../../app/engine/faults/build-fault-list.ts'
import { faultName, type FaultList } from '../../app/engine/faults/fault-list.ts'
import { readBench } from '../../app/engine/formats/bench/read-bench.ts'
import type { DetectionProfile } from '../../app/engine/simulate/detection-profile.ts'
import { bitAt, emptyPlane, setBit, type PatternSet } from '../../app/engine/simulate/pattern-set.ts'
import type { SimulationTask } from '../../app/engine/simulate/simulation.ts'
import { simulateTwin } from '../../app/engine/simulate/twin.ts'
import { createRandom } from '../../app/engine/source/random.ts'
import { createSimulationPool } from '../../app/workers/simulation-pool.ts'
import { randomPatterns } from '../helpers/random-run.ts'
import { median, type RowOrder, type RowResult } from './bench-row.ts'
import { CIRCUITS, MILLION } from './circuits.ts'

const SEED = 2026
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
  const drawn = randomPatterns(circuit, order.nPatterns, SEED)
  const patterns = order.mode.endsWith('X') ? withUnknowns(drawn, 0.01) : drawn
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

  const withYardstick = order.yardstick !== null && order.mode !== 'matrix' && order.threads === 1
  const files = {
    netlist: join(folder, 'c.bench'),
    patterns: join(folder, 'p.txt'),
    faults: join(folder, 'f.csv'),
  }
  if (withYardstick) {
    writeFileSync(files.netlist, text)
    writeFileSync(files.patterns, patternText(patterns))
  }
  const ours: number[] = []
  const single: number[] = []
  const theirs: number[] = []
  let last = await simulate(order.threads)
  for (let run = 0; run < order.runs; run++) {
    last = await simulate(order.threads)
    ours.push(last.seconds)
    if (order.threads > 1) single.push((await simulate(1)).seconds)
    if (withYardstick) theirs.push(yardstickSeconds(files, run === 0))
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
    toYardstick: withYardstick ? median(theirs) / seconds : null,
    toOneThread: order.threads > 1 ? median(single) / seconds : null,
    toTwin: pairs / seconds / twinPairsPerSecond(task),
    agrees: withYardstick ? agrees(files.faults, faults, last.profile) : null,
  }
}

function yardstickSeconds(
  files: { netlist: string; patterns: string; faults: string },
  writeFaults: boolean,
): number {
  const mode =
    order.mode === 'first detection'
      ? ['--mode', 'drop']
      : order.mode === 'up to 10'
        ? ['--mode', 'drop', '--ndet', '10']
        : ['--mode', 'full']
  const options = [...mode, '--width', '256', '--threads', '1', '--no-curve']
  if (writeFaults) options.push('--csv', files.faults)
  const printed = execFileSync(order.yardstick ?? '', ['sim', files.netlist, files.patterns, ...options], {
    encoding: 'utf8',
    maxBuffer: 2 ** 28,
  })
  return (JSON.parse(printed) as { kernel_seconds: number }).kernel_seconds
}

/** True where every fault's first pattern, count and possible detection are those of the yardstick. */
function agrees(file: string, faults: FaultList, profile: DetectionProfile): boolean {
  const found = new Map<string, string>()
  for (const row of readFileSync(file, 'utf8').trimEnd().split('\n').slice(1)) {
    const [name, , first, count, possible] = row.split(',')
    found.set(name, `${first},${count},${possible}`)
  }
  for (let fault = 0; fault < faults.nFaults; fault++) {
    const group = faults.classOf[fault]
    const own = `${profile.first[group]},${profile.detections[group]},${profile.possibly[group]}`
    if (found.get(faultName(faults, fault)) !== own) return false
  }
  return found.size === faults.nFaults
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

/** The patterns with that share of the input bits turned to X. */
function withUnknowns(patterns: PatternSet, share: number): PatternSet {
  const random = createRandom(SEED + 1)
  const unknown = emptyPlane(patterns.value.rows, patterns.nPatterns)
  for (let row = 0; row < unknown.rows; row++) {
    for (let pattern = 0; pattern < patterns.nPatterns; pattern++) {
      if (random.fraction() < share) setBit(unknown, row, pattern)
    }
  }
  const words = patterns.value.words.map((word, at) => word & ~unknown.words[at])
  return { ...patterns, value: { ...patterns.value, words }, unknown }
}

function patternText({ nPatterns, value, unknown }: PatternSet): string {
  const lines: string[] = []
  for (let pattern = 0; pattern < nPatterns; pattern++) {
    let line = ''
    for (let row = 0; row < value.rows; row++) {
      line += unknown !== null && bitAt(unknown, row, pattern) ? 'X' : bitAt(value, row, pattern) ? '1' : '0'
    }
    lines.push(line)
  }
  return lines.join('\n') + '\n'
}
