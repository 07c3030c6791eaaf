/** A list of 32-bit integers that grows by doubling: what readers collect in, without an object an entry. */
export class IntList {
  data: Int32Array
  length = 0

  constructor(capacity = 64) {
    this.data = new Int32Array(capacity)
  }

  push(value: number): void {
    if (this.length === this.data.length) this.grow(this.length + 1)
    this.data[this.length++] = value
  }

  /** Appends that many copies of a value. */
  fill(value: number, count: number): void {
    if (this.length + count > this.data.length) this.grow(this.length + count)
    this.data.fill(value, this.length, this.length + count)
    this.length += count
  }

  /** The entries so far, as a view that the next push may detach. */
  view(from = 0, to: number = this.length): Int32Array {
    return this.data.subarray(from, to)
  }

  private grow(needed: number): void {
    const larger = new Int32Array(Math.max(needed, this.data.length * 2))
    larger.set(this.data)
    this.data = larger
  }
}
