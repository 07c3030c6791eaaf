/** Builds those of the named parts whose sources changed since they were last built. */
export function buildStale(names: readonly ('kernel' | 'node' | 'renderer' | 'electron')[]): Promise<void>
