import { checkKernel, type KernelExports } from '../engine/simulate/kernel.ts'

/** Returns the kernel's exports on that memory, made sure to be those that this program packs for. */
export function instantiateKernel(module: WebAssembly.Module, memory: WebAssembly.Memory): KernelExports {
  const { exports } = new WebAssembly.Instance(module, { env: { memory } })
  const kernel = exports as unknown as KernelExports
  checkKernel(kernel)
  return kernel
}
