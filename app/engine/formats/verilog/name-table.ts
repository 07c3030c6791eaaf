const EMPTY = -1

/**
 * Interned identifiers: equal texts have one id, 0 upwards in the order of first sight. A name is kept as a place in
 * its source, so that millions of them cost no string until someone asks for the text.
 */
export class NameTable {
  private readonly texts: string[] = []
  private count = 0
  private source = new Uint32Array(1024)
  private start = new Uint32Array(1024)
  private length = new Uint32Array(1024)
  private hashes = new Int32Array(1024)
  private slots = new Int32Array(4096).fill(EMPTY)

  get size(): number {
    return this.count
  }

  /** Makes a text known, so that names can point into it; returns its number for `intern`. */
  addText(text: string): number {
    return this.texts.push(text) - 1
  }

  /** The id of text[start, end), whose hash is `hashName` of it. */
  intern(source: number, start: number, end: number, hash: number): number {
    const { hashes, length } = this
    const text = this.texts[source]
    const mask = this.slots.length - 1
    const size = end - start
    let slot = (hash ^ (hash >>> 15)) & mask
    for (;;) {
      const id = this.slots[slot]
      if (id === EMPTY) break
      if (hashes[id] === hash && length[id] === size && this.isEqual(id, text, start, size)) return id
      slot = (slot + 1) & mask
    }
    if (this.count === this.start.length) this.grow()
    const id = this.count++
    this.source[id] = source
    this.start[id] = start
    this.length[id] = size
    this.hashes[id] = hash
    this.slots[slot] = id
    if (this.count * 2 > this.slots.length) this.rehash()
    return id
  }

  /** The id of a text that is no part of a source. */
  internText(text: string): number {
    const source = this.addText(text)
    let hash = 0
    for (let at = 0; at < text.length; at++) hash = hashStep(hash, text.charCodeAt(at))
    return this.intern(source, 0, text.length, hash)
  }

  text(id: number): string {
    const start = this.start[id]
    return this.texts[this.source[id]].slice(start, start + this.length[id])
  }

  private isEqual(id: number, text: string, start: number, size: number): boolean {
    const known = this.texts[this.source[id]]
    const from = this.start[id]
    for (let at = 0; at < size; at++) {
      if (known.charCodeAt(from + at) !== text.charCodeAt(start + at)) return false
    }
    return true
  }

  private grow(): void {
    const capacity = this.start.length * 2
    const source = new Uint32Array(capacity)
    source.set(this.source)
    this.source = source
    const start = new Uint32Array(capacity)
    start.set(this.start)
    this.start = start
    const length = new Uint32Array(capacity)
    length.set(this.length)
    this.length = length
    const hashes = new Int32Array(capacity)
    hashes.set(this.hashes)
    this.hashes = hashes
  }

  private rehash(): void {
    const slots = new Int32Array(this.slots.length * 2).fill(EMPTY)
    const mask = slots.length - 1
    for (let id = 0; id < this.count; id++) {
      const hash = this.hashes[id]
      let slot = (hash ^ (hash >>> 15)) & mask
      while (slots[slot] !== EMPTY) slot = (slot + 1) & mask
      slots[slot] = id
    }
    this.slots = slots
  }
}

/** One character's step of the hash that `intern` expects; start from 0. */
export function hashStep(hash: number, code: number): number {
  return (Math.imul(hash, 31) + code) | 0
}
