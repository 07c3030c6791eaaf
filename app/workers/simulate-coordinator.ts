import { parentPort, receiveMessageOnPort, type MessagePort } from 'node:worker_threads'
import {
  KernelThread,
  blocksBefore,
  gatherMatrix,
  gatherProfile,
  resumeProfile,
  unitsOf,
} from '../engine/simulate/kernel.ts'
import { kernelBytes, planKernel, writeOwn, writeShared } from '../engine/simulate/kernel-layout.ts'
import { instantiateKernel, patternsPerBlockOf, sharedMemory } from './instantiate-kernel.ts'
import { sendBlockReport, waitForReports } from './send-block-report.ts'
import { simulateUnits } from './simulate-units.ts'
import { warmUp } from './warm-up.ts'
import {
  CLOSED,
  Control,
  type JoinRequest,
  type RunReport,
  type RunRequest,
  type SimulationCheckpoint,
} from './simulate-protocol.ts'

const CHECKPOINT_MILLISECONDS = 1000
/** Making checkpoints takes at most this share of a run. */
const CHECKPOINT_SHARE = 0.03

/** Serves the pool's owner: plans and packs each run, simulates on this thread and on the helpers, gathers results. */
export function serveAsCoordinator(wasmBytes: Uint8Array, helpers: readonly MessagePort[]): void {
  const owner = parentPort
  if (owner === null) throw new Error('the coordinator of a simulation pool runs on a worker thread only')
  const module = new WebAssembly.Module(wasmBytes)
  const patternsPerBlock = patternsPerBlockOf(module)
  const serve = (request: RunRequest): void => {
    const send = (report: RunReport): void => owner.postMessage(report)
    try {
      runTask(request, module, patternsPerBlock, helpers, send)
    } catch (error) {
      const message = error instanceof Error ? error.message : String(error)
      send({ run: request.run, kind: 'failed', message })
    } finally {
      const control = new Int32Array(request.control)
      Atomics.store(control, Control.Over, 1)
      wakeHelpers(control)
    }
  }
  let early: { message: RunRequest } | undefined
  warmUp(wasmBytes, () => {
    early = receiveMessageOnPort(owner) as { message: RunRequest } | undefined
    return early === undefined
  })
  owner.on('message', serve)
  if (early !== undefined) serve(early.message)
}

function runTask(
  request: RunRequest,
  module: WebAssembly.Module,
  patternsPerBlock: number,
  helpers: readonly MessagePort[],
  send: (report: RunReport) => void,
): void {
  const { run, task, resumeFrom } = request
  const control = new Int32Array(request.control)
  const threads = Math.max(1, Math.min(request.threads, helpers.length + 1))
  const plan = planKernel(task, patternsPerBlock)
  const { layout } = plan
  const memoryBytes = kernelBytes(layout, threads)
  const memory = sharedMemory(memoryBytes)
  const { buffer } = memory
  writeShared(plan, task, buffer)
  for (let thread = 0; thread < threads; thread++) writeOwn(layout, thread, buffer)
  if (resumeFrom !== null) resumeProfile(layout, buffer, resumeFrom.profile)

  const units = unitsOf(layout, Math.floor((resumeFrom?.patternsDone ?? 0) / layout.blockWidth))
  Atomics.store(control, Control.Units, units.count)
  for (let thread = 1; thread < threads; thread++) {
    const join: JoinRequest = { run, memory, layout, units, thread, control: request.control }
    helpers[thread - 1]?.postMessage(join)
  }
  const started = performance.now()
  const own = new KernelThread(instantiateKernel(module, memory), layout, 0)
  const checkpointAt = (unit: number): SimulationCheckpoint => ({
    patternsDone: Math.min(task.patterns.nPatterns, blocksBefore(units, unit) * layout.blockWidth),
    profile: gatherProfile(layout, buffer, threads),
  })
  let checkpoint = resumeFrom ?? checkpointAt(0)
  let nextCheckpoint = started + CHECKPOINT_MILLISECONDS
  const afterUnit = (unit: number): boolean => {
    if (layout.easyFrom !== null) sendBlockReport(own, buffer, run, control)
    return unit < units.inFirstBlock || performance.now() < nextCheckpoint
  }

  for (;;) {
    const outcome = simulateUnits(own, control, units, afterUnit)
    if (outcome !== 'due') waitForHelpers(control)
    if (outcome === 'cancelled' || Atomics.load(control, Control.Cancel) !== 0) {
      send({ run, kind: 'cancelled', checkpoint })
      return
    }
    if (outcome === 'finished') break
    const next = Atomics.exchange(control, Control.NextUnit, CLOSED)
    waitForHelpers(control)
    if (Atomics.load(control, Control.Cancel) !== 0) continue
    const pausedAt = performance.now()
    checkpoint = checkpointAt(Math.min(next, units.count))
    if (request.wantCheckpoints) send({ run, kind: 'checkpoint', checkpoint })
    Atomics.store(control, Control.NextUnit, next)
    wakeHelpers(control)
    const now = performance.now()
    nextCheckpoint = now + Math.max(CHECKPOINT_MILLISECONDS, (now - pausedAt) / CHECKPOINT_SHARE)
  }
  const kernelSeconds = (performance.now() - started) / 1000
  // Helpers' reports come by ports of their own: none may come after the end.
  waitForReports(control, 0)
  const profile = gatherProfile(layout, buffer, threads)
  const matrix = gatherMatrix(layout, profile, buffer)
  send({ run, kind: 'done', profile, matrix, kernelSeconds, memoryBytes })
}

function waitForHelpers(control: Int32Array): void {
  for (let busy = Atomics.load(control, Control.Busy); busy > 0; busy = Atomics.load(control, Control.Busy)) {
    Atomics.wait(control, Control.Busy, busy)
  }
}

function wakeHelpers(control: Int32Array): void {
  Atomics.add(control, Control.Generation, 1)
  Atomics.notify(control, Control.Generation)
}
