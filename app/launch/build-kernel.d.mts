/** Compiles the simulation kernel to that file; throws with the compiler's words where it can't. */
export function buildKernel(output?: string): Promise<void>
