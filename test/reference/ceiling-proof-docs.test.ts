import { execFileSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { ceilingProof } from '../../app/engine/choose/ceiling-proof.ts'
import { ceilingOf, patternBudgets } from '../../app/engine/choose/ceiling.ts'
import { freeRules } from '../../app/engine/choose/choice-rules.ts'
import { unitCosts } from '../../app/engine/choose/choice-task.ts'
import { randomRun } from '../helpers/random-run.ts'
import { randomBench } from '../helpers/random-circuit.ts'

const guide = readFileSync(new URL('../../DEVELOPERS.md', import.meta.url), 'utf8')
const program = /## Checking a ceiling[\s\S]*?```js\n([\s\S]*?)```/.exec(guide)?.[1] ?? ''

// SOURCE: own derivation of the bound, added up by the program that the guide prints, which shares no code with the engine.
describe("the guide's program", () => {
  it('adds up the multipliers of a ceiling to the same bound, and refuses multipliers out of their limits', () => {
    const folder = mkdtempSync(join(tmpdir(), 'proof-'))
    try {
      const text = randomBench(5, { inputs: 12, gates: 150, flipFlops: 4, outputs: 6 })
      const { matrix, weights } = randomRun({ name: 'random.bench', text }, 64, 1)
      const task = { matrix, weights, costs: unitCosts(64), rules: freeRules(64), detections: 1 }
      const ceiling = ceilingOf(task, patternBudgets(64))!
      const proof = join(folder, 'proof.json')
      writeFileSync(join(folder, 'check.mjs'), program)
      const check = () =>
        execFileSync(process.execPath, [join(folder, 'check.mjs'), proof], {
          encoding: 'utf8',
          stdio: 'pipe',
        })
      for (const index of [0, 4, 11, 30]) {
        const exported = ceilingProof(task, ceiling, index)!
        writeFileSync(proof, JSON.stringify(exported))
        expect(check()).toBe(`No choice within ${index + 1} detects more than ${ceiling.bounds[index]}.\n`)
      }
      const broken = ceilingProof(task, ceiling, 4)!
      const [weight, need, , columns] = broken.rows[0]
      const rows = [[weight, need, 2 * weight * broken.multiplierScale, columns], ...broken.rows.slice(1)]
      writeFileSync(proof, JSON.stringify({ ...broken, rows }))
      expect(check).toThrow('outside its limits')
    } finally {
      rmSync(folder, { recursive: true, force: true })
    }
  })
})
