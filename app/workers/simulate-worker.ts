import { workerData } from 'node:worker_threads'
import { serveAsCoordinator } from './simulate-coordinator.ts'
import { serveAsHelper } from './simulate-helper.ts'
import type { SimulateWorkerData } from './simulate-protocol.ts'

const data = workerData as SimulateWorkerData
if (data.role === 'coordinator') serveAsCoordinator(data.wasmBytes, data.helpers)
else serveAsHelper(data.wasmBytes, data.coordinator)
