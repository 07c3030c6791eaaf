/** The part of WebAssembly's interface that the simulation threads use; neither ES nor Node's types declare it. */
declare namespace WebAssembly {
  class Module {
    constructor(bytes: Uint8Array)
  }
  class Memory {
    constructor(descriptor: { initial: number; maximum: number; shared: true })
    readonly buffer: SharedArrayBuffer
  }
  class Instance {
    constructor(module: Module, imports: { env: { memory: Memory } })
    readonly exports: Record<string, unknown>
  }
}
