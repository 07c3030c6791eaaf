/** Compiles the simulation kernel; throws with the compiler's words where it can't. */
export function buildKernel(options?: { width?: 256 | 512; output?: string }): Promise<void>
