/** What a job gives back, and the buffers that go over with it instead of being copied. */
export class DeskAnswer<Output> {
  readonly output: Output
  readonly buffers: readonly ArrayBuffer[]

  constructor(output: Output, buffers: readonly ArrayBuffer[] = []) {
    this.output = output
    this.buffers = buffers
  }
}
