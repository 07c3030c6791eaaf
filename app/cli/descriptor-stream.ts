import { writeSync } from 'node:fs'
import { Writable } from 'node:stream'

const WAIT_MILLISECONDS = 5

/** Returns a stream that writes to a file descriptor at once, so that a thread that is busy is still heard. */
export function descriptorStream(descriptor: number, isTTY: boolean): Writable & { readonly isTTY: boolean } {
  const stream = new Writable({
    decodeStrings: true,
    write(chunk: Buffer, _encoding, done) {
      try {
        writeAll(descriptor, chunk)
        done()
      } catch (error) {
        done(error as Error)
      }
    },
  })
  return Object.assign(stream, { isTTY })
}

function writeAll(descriptor: number, bytes: Buffer): void {
  const clock = new Int32Array(new SharedArrayBuffer(4))
  for (let at = 0; at < bytes.length;) {
    try {
      at += writeSync(descriptor, bytes, at)
    } catch (error) {
      const { code } = error as NodeJS.ErrnoException
      // Whoever reads the output may stop early, as `head` does.
      if (code === 'EPIPE') return
      // A pipe that is full: whoever reads it needs a moment.
      if (code !== 'EAGAIN') throw error
      Atomics.wait(clock, 0, 0, WAIT_MILLISECONDS)
    }
  }
}
