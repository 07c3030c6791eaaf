import type { KernelThread, Units } from '../engine/simulate/kernel.ts'
import { Control } from './simulate-protocol.ts'

/**
 * Simulates units until none is left to claim ('finished'), until `afterUnit` returns false ('due'), or until the run
 * is cancelled, maybe in the middle of one ('cancelled').
 */
export function simulateUnits(
  thread: KernelThread,
  control: Int32Array,
  units: Units,
  afterUnit: (unit: number) => boolean,
): 'finished' | 'due' | 'cancelled' {
  const goOn = (): boolean => Atomics.load(control, Control.Cancel) === 0
  while (goOn()) {
    const unit = Atomics.add(control, Control.NextUnit, 1)
    if (unit >= units.count) return 'finished'
    if (!thread.simulateUnit(units, unit, goOn)) return 'cancelled'
    Atomics.add(control, Control.UnitsDone, 1)
    if (!afterUnit(unit)) return 'due'
  }
  return 'cancelled'
}
