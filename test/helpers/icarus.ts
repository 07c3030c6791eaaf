import { execFileSync, spawnSync } from 'node:child_process'
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'

/** Whether Icarus Verilog, the general-purpose simulator that some checks are made against, is on this machine. */
export const hasIcarus: boolean = spawnSync('iverilog', ['-V']).status === 0

if (!hasIcarus) console.warn('skipped where needed: Icarus Verilog (iverilog, vvp) is not installed')

/** Compiles and runs Verilog text and returns what it prints, line by line. */
export function runIcarus(verilog: string): string[] {
  const folder = mkdtempSync(join(tmpdir(), 'icarus-'))
  try {
    const source = join(folder, 'bench.v')
    const program = join(folder, 'bench.vvp')
    writeFileSync(source, verilog)
    execFileSync('iverilog', ['-g2005', '-o', program, source], { stdio: 'pipe' })
    const printed = execFileSync('vvp', ['-n', program], { encoding: 'utf8', maxBuffer: 1 << 28 })
    return printed.split('\n').filter((line) => line !== '')
  } finally {
    rmSync(folder, { recursive: true, force: true })
  }
}
