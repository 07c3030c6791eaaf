import type { MessagePort } from 'node:worker_threads'
import { KernelThread } from '../engine/simulate/kernel.ts'
import { instantiateKernel } from './instantiate-kernel.ts'
import { sendBlockReport } from './send-block-report.ts'
import { simulateUnits } from './simulate-units.ts'
import { Control, type JoinRequest } from './simulate-protocol.ts'

/** Serves a coordinator: joins each run that it hears of and simulates blocks until the run is over. */
export function serveAsHelper(wasmBytes: Uint8Array, coordinator: MessagePort): void {
  const module = new WebAssembly.Module(wasmBytes)
  coordinator.on('message', (request: JoinRequest) => {
    const { run, memory, layout, units } = request
    const control = new Int32Array(request.control)
    const kernel = instantiateKernel(module, memory)
    const thread = new KernelThread(kernel, layout, request.thread)
    const afterUnit = (): boolean => {
      if (layout.easyFrom !== null) sendBlockReport(thread, memory.buffer, run, control)
      return true
    }
    while (Atomics.load(control, Control.Over) === 0) {
      const generation = Atomics.load(control, Control.Generation)
      Atomics.add(control, Control.Busy, 1)
      simulateUnits(thread, control, units, afterUnit)
      Atomics.sub(control, Control.Busy, 1)
      Atomics.notify(control, Control.Busy)
      if (Atomics.load(control, Control.Over) === 0) Atomics.wait(control, Control.Generation, generation)
    }
  })
}
