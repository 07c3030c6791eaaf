import { parentPort } from 'node:worker_threads'
import type { KernelThread } from '../engine/simulate/kernel.ts'
import { Control, type RunReport } from './simulate-protocol.ts'

/** Reports that may wait for the pool's owner: more would let memory grow where it takes them slowly. */
const MAX_WAITING = 4

/** Sends the pool's owner what the thread's last block detected, once few enough reports wait for it. */
export function sendBlockReport(
  thread: KernelThread,
  memory: SharedArrayBuffer,
  run: number,
  control: Int32Array,
): void {
  waitForReports(control, MAX_WAITING - 1)
  Atomics.add(control, Control.Reports, 1)
  const block = thread.report(memory)
  const { hardClasses, hardWords, easyClasses, easyCounts } = block
  const buffers = [hardClasses, hardWords, easyClasses, easyCounts].map(({ buffer }) => buffer as ArrayBuffer)
  parentPort?.postMessage({ run, kind: 'block', block } satisfies RunReport, buffers)
}

/** Waits until at most so many reports are left that the owner has not taken, or the run is cancelled. */
export function waitForReports(control: Int32Array, most: number): void {
  for (;;) {
    const waiting = Atomics.load(control, Control.Reports)
    if (waiting <= most || Atomics.load(control, Control.Cancel) !== 0) return
    Atomics.wait(control, Control.Reports, waiting, 100)
  }
}
