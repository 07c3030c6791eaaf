import { beforeAll, describe, expect, test } from 'vitest'
import { simulateTwin } from '../../app/engine/simulate/twin.ts'
import { simulateInProcess } from '../../app/workers/simulate-in-process.ts'
import { freshKernel } from '../helpers/kernel.ts'
import { randomTask } from '../helpers/random-task.ts'

// The reference is the slow simulation that injects each fault and evaluates the whole circuit, by the definition of
// detection; it is itself checked against Icarus Verilog with forced nets.
describe('the kernel gives the profile of the slow simulation', () => {
  let kernel: Uint8Array
  beforeAll(async () => {
    kernel = await freshKernel()
  }, 60_000)

  test.each(Array.from({ length: 10 }, (_, at) => at))('on random circuits, batch %i of 10', (batch) => {
    for (let seed = 20 * batch; seed < 20 * (batch + 1); seed++) {
      const task = randomTask(seed)
      const expected = simulateTwin(task)
      for (const parts of [1, 2, 3]) {
        expect(simulateInProcess(kernel, task, parts), `seed ${seed}, ${parts} parts`).toEqual(expected)
      }
    }
  })
})
