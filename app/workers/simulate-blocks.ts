import type { KernelThread } from '../engine/simulate/kernel.ts'
import { Control } from './simulate-protocol.ts'

/**
 * Simulates blocks until none is left to claim ('finished'), until `isDue` says so after one ('due'), or until the run
 * is cancelled, maybe in the middle of one ('cancelled').
 */
export function simulateBlocks(
  thread: KernelThread,
  control: Int32Array,
  nBlocks: number,
  isDue: () => boolean = () => false,
): 'finished' | 'due' | 'cancelled' {
  const goOn = (): boolean => Atomics.load(control, Control.Cancel) === 0
  while (goOn()) {
    const block = Atomics.add(control, Control.NextBlock, 1)
    if (block >= nBlocks) return 'finished'
    if (!thread.simulateBlock(block, goOn)) return 'cancelled'
    Atomics.add(control, Control.BlocksDone, 1)
    if (isDue()) return 'due'
  }
  return 'cancelled'
}
