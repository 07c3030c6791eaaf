// Compares the kernel with the native second opinion, fault by fault, on every .bench file of ../shared/data, with and
// without X, in three modes. Prints each circuit that differs; exit code 1 where any does.
import { globSync, mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { basename, join } from 'node:path'
import { buildFaultList } from '../../app/engine/faults/build-fault-list.ts'
import { readBench } from '../../app/engine/formats/bench/read-bench.ts'
import { simulateInProcess } from '../../app/workers/simulate-in-process.ts'
import { benchPatterns } from './bench-patterns.ts'
import { disagreements, hasYardstick, runYardstick, writeYardstickFiles } from './yardstick.ts'

const N_PATTERNS = 1200
const root = join(import.meta.dirname, '../..')
const netlists = globSync(join(root, '../shared/data/circuits/*/*.bench')).sort()
if (hasYardstick) compareAll()
else console.log('skipped: there is no yardstick beside the repository')

function compareAll(): void {
  const kernel = readFileSync(join(root, 'out/kernel/kernel.wasm'))
  const folder = mkdtempSync(join(tmpdir(), 'tallycut-agree-'))
  let compared = 0
  for (const netlist of netlists) {
    const text = readFileSync(netlist, 'utf8')
    const { value } = readBench({ name: netlist, text })
    if (value === null) throw new Error(`${netlist} can't be read`)
    const { circuit } = value
    const faults = buildFaultList(circuit)
    for (const shareOfX of [0, 0.01, 0.1]) {
      const patterns = benchPatterns(circuit, N_PATTERNS, shareOfX)
      const files = writeYardstickFiles(folder, text, patterns)
      for (const detectionLimit of [0, 1, 5]) {
        runYardstick(files, detectionLimit, true)
        const task = { circuit, faults, patterns, detectionLimit, classes: null, wantMatrix: false }
        const differing = disagreements(files, faults, simulateInProcess(kernel, task).profile)
        compared++
        if (differing.length === 0) continue
        process.exitCode = 1
        const where = `${basename(netlist)}, limit ${detectionLimit}, X ${shareOfX}`
        console.log(`${where}: ${differing.length} faults differ, such as ${differing[0]}`)
      }
    }
  }
  rmSync(folder, { recursive: true })
  console.log(`${compared} profiles compared on ${netlists.length} circuits`)
}
