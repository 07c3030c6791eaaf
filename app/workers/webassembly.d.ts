/** The part of WebAssembly's interface that the simulation threads use; neither ES nor Node's types declare it. */
declare namespace WebAssembly {
  interface Module {
    readonly [Symbol.toStringTag]: string
  }
  interface Memory {
    readonly buffer: SharedArrayBuffer
  }
  interface Instance {
    readonly exports: Record<string, unknown>
  }
  const Module: new (bytes: Uint8Array) => Module
  const Memory: new (descriptor: { initial: number; maximum: number; shared: true }) => Memory
  const Instance: new (module: Module, imports: { env: { memory: Memory } }) => Instance
}
