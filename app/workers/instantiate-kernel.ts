import { checkKernel, type KernelExports } from '../engine/simulate/kernel.ts'

const PAGE = 65536
const MAX_PAGES = 65536

/** Returns the kernel's exports on that memory, made sure to be those that this program packs for. */
export function instantiateKernel(module: WebAssembly.Module, memory: WebAssembly.Memory): KernelExports {
  const { exports } = new WebAssembly.Instance(module, { env: { memory } })
  const kernel = exports as unknown as KernelExports
  checkKernel(kernel)
  return kernel
}

export function patternsPerBlockOf(module: WebAssembly.Module): number {
  return instantiateKernel(module, sharedMemory(0)).patternsPerBlock()
}

/** Returns memory of at least that many bytes, all zero; throws a RangeError where there can't be so much. */
export function sharedMemory(bytes: number): WebAssembly.Memory {
  const megabytes = Math.ceil(bytes / 2 ** 20)
  const pages = Math.max(1, Math.ceil(bytes / PAGE))
  if (pages > MAX_PAGES) {
    throw new RangeError(
      `The simulation needs ${megabytes} MB of memory in one piece, and 4096 MB is the most. Use fewer threads or patterns.`,
    )
  }
  try {
    return new WebAssembly.Memory({ initial: pages, maximum: MAX_PAGES, shared: true })
  } catch (error) {
    throw new RangeError(`The simulation needs ${megabytes} MB of memory; the system did not give them.`, {
      cause: error,
    })
  }
}
