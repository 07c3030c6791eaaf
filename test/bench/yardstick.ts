import { execFileSync } from 'node:child_process'
import { existsSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { faultName, type FaultList } from '../../app/engine/faults/fault-list.ts'
import type { DetectionProfile } from '../../app/engine/simulate/detection-profile.ts'
import { bitAt, type PatternSet } from '../../app/engine/simulate/pattern-set.ts'

const program = join(import.meta.dirname, '../../../shared/tools/yardstick')

/** Whether the native second opinion lies beside the repository. */
export const hasYardstick: boolean = existsSync(program)

/** A circuit and its patterns in files that the yardstick reads, and the file of faults that it writes. */
export type YardstickFiles = { readonly netlist: string; readonly patterns: string; readonly faults: string }

export function writeYardstickFiles(folder: string, netlist: string, patterns: PatternSet): YardstickFiles {
  const files = {
    netlist: join(folder, 'circuit.bench'),
    patterns: join(folder, 'patterns.txt'),
    faults: join(folder, 'faults.csv'),
  }
  writeFileSync(files.netlist, netlist)
  writeFileSync(files.patterns, patternText(patterns))
  return files
}

/** Simulates on one thread, 256 patterns at once, and returns the seconds that its kernel took. */
export function runYardstick(files: YardstickFiles, detectionLimit: number, writeFaults: boolean): number {
  const mode =
    detectionLimit === 0 ? ['--mode', 'full'] : ['--mode', 'drop', '--ndet', String(detectionLimit)]
  const options = [...mode, '--width', '256', '--threads', '1', '--no-curve']
  if (writeFaults) options.push('--csv', files.faults)
  const printed = execFileSync(program, ['sim', files.netlist, files.patterns, ...options], {
    encoding: 'utf8',
    maxBuffer: 2 ** 28,
  })
  return (JSON.parse(printed) as { kernel_seconds: number }).kernel_seconds
}

/** The faults whose first pattern, count or possible detection are not those that the yardstick wrote. */
export function disagreements(files: YardstickFiles, faults: FaultList, profile: DetectionProfile): string[] {
  const found = new Map<string, string>()
  for (const row of readFileSync(files.faults, 'utf8').trimEnd().split('\n').slice(1)) {
    const [name, , first, count, possible] = row.split(',')
    found.set(name, `${first},${count},${possible}`)
  }
  const differing: string[] = []
  for (let fault = 0; fault < faults.nFaults; fault++) {
    const group = faults.classOf[fault]
    const own = `${profile.first[group]},${profile.detections[group]},${profile.possibly[group]}`
    const name = faultName(faults, fault)
    if (found.get(name) !== own) differing.push(name)
    found.delete(name)
  }
  return [...differing, ...found.keys()]
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
