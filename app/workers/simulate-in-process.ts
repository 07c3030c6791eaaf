import { KernelThread, gatherMatrix, gatherProfile, unitsOf } from '../engine/simulate/kernel.ts'
import { kernelTaskOf } from '../engine/simulate/kernel-task.ts'
import { kernelBytes, planKernel, writeOwn, writeShared } from '../engine/simulate/kernel-layout.ts'
import type { SimulationResult, SimulationTask } from '../engine/simulate/simulation.ts'
import { instantiateKernel, patternsPerBlockOf, sharedMemory } from './instantiate-kernel.ts'

/**
 * Simulates a task on the calling thread and returns when it is done: for tests and small circuits. `parts` says how
 * many threads' parts of the memory take turns at the work, as they would in a pool.
 */
export function simulateInProcess(wasmBytes: Uint8Array, task: SimulationTask, parts = 1): SimulationResult {
  const module = new WebAssembly.Module(wasmBytes)
  const kernelTask = kernelTaskOf(task)
  const plan = planKernel(kernelTask, patternsPerBlockOf(module))
  const { layout } = plan
  const memory = sharedMemory(kernelBytes(layout, parts))
  writeShared(plan, kernelTask, memory.buffer)
  const threads = Array.from({ length: parts }, (_, thread) => {
    writeOwn(layout, thread, memory.buffer)
    return new KernelThread(instantiateKernel(module, memory), layout, thread)
  })
  const units = unitsOf(layout, 0)
  for (let unit = 0; unit < units.count; unit++) threads[unit % parts]?.simulateUnit(units, unit, () => true)
  const profile = gatherProfile(layout, memory.buffer, parts)
  return { profile, matrix: gatherMatrix(layout, profile, memory.buffer) }
}
