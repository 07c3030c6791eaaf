import { readFile } from 'node:fs/promises'
import { pathToFileURL } from 'node:url'
import type { DeskThreads } from './desk-context.ts'
import { createSimulationPool, type SimulationPool } from './simulation-pool.ts'

let pool: Promise<SimulationPool> | null = null

/** Returns this desk's own threads for simulation, started when they are first asked for. */
export function deskPool({ kernel, simulateScript, count }: DeskThreads): Promise<SimulationPool> {
  pool ??= readFile(kernel).then((bytes) =>
    createSimulationPool({
      threads: count,
      wasmBytes: new Uint8Array(bytes),
      workerUrl: pathToFileURL(simulateScript),
    }),
  )
  return pool
}
