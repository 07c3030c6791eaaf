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
  /** Open addressing: id and hash of each slot side by side, so that a miss costs one look into memory. */
  private slots = emptySlots(4096)

  /** Makes a text known, so that names can point into it; returns its number for `intern`. */
  addText(text: string): number {
    return this.texts.push(text) - 1
  }

  /** The id of text[start, end), whose hash is that of `hashStep` over its characters. */
  intern(source: number, start: number, end: number, hash: number): number {
    const { slots, length } = this
    const text = this.texts[source]
    const mask = slots.length - 2
    const size = end - start
    let slot = firstSlot(hash, mask)
    for (;;) {
      const id = slots[slot]
      if (id === EMPTY) break
      if (slots[slot + 1] === hash && length[id] === size && this.isEqual(id, text, start, size)) return id
      slot = (slot + 2) & mask
    }
    if (this.count === this.start.length) this.grow()
    const id = this.count++
    this.source[id] = source
    this.start[id] = start
    this.length[id] = size
    slots[slot] = id
    slots[slot + 1] = hash
    if (this.count * 4 > slots.length) this.rehash()
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
    const larger = (column: Uint32Array): Uint32Array<ArrayBuffer> => {
      const grown = new Uint32Array(column.length * 2)
      grown.set(column)
      return grown
    }
    this.source = larger(this.source)
    this.start = larger(this.start)
    this.length = larger(this.length)
  }

  private rehash(): void {
    const old = this.slots
    const slots = emptySlots(old.length)
    const mask = slots.length - 2
    for (let at = 0; at < old.length; at += 2) {
      if (old[at] === EMPTY) continue
      let slot = firstSlot(old[at + 1], mask)
      while (slots[slot] !== EMPTY) slot = (slot + 2) & mask
      slots[slot] = old[at]
      slots[slot + 1] = old[at + 1]
    }
    this.slots = slots
  }
}

function emptySlots(count: number): Int32Array<ArrayBuffer> {
  return new Int32Array(2 * count).fill(EMPTY)
}

/** Where the search for a hash begins: an even place within the mask. */
function firstSlot(hash: number, mask: number): number {
  return ((hash ^ (hash >>> 15)) << 1) & mask
}

/** One character's step of the hash that `intern` expects; start from 0. */
export function hashStep(hash: number, code: number): number {
  return (Math.imul(hash, 31) + code) | 0
}
