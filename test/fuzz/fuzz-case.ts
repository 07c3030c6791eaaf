import type { Reading } from '../../app/engine/source/diagnostic.ts'
import { createRandom } from '../../app/engine/source/random.ts'
import type { FuzzedReader } from './fuzzed-readers.ts'
import { mutate } from './mutate.ts'

/** The text of one case: the same for the same reader, seed and number. */
export function caseText(reader: FuzzedReader, seed: number, number: number): string {
  const { below } = createRandom(Math.imul(seed, 0x9e3779b1) ^ number)
  return mutate(reader.seeds[below(reader.seeds.length)], reader.seeds, below)
}

/** Reads one text and returns what is wrong with how it was read, null where nothing is. */
export function problemOf(reader: FuzzedReader, text: string): string | null {
  try {
    for (const reading of reader.read({ name: 'fuzzed', text })) {
      const problem = checkReading(reading, text.length)
      if (problem !== null) return problem
    }
    return null
  } catch (reason) {
    return `threw ${reason instanceof Error ? (reason.stack ?? reason.message) : String(reason)}`
  }
}

/** Each reading has a value or an error, never both, and each diagnostic a message and a place in the text. */
function checkReading({ value, diagnostics }: Reading<unknown>, length: number): string | null {
  const errors = diagnostics.filter(({ severity }) => severity === 'error')
  if (value === null && errors.length === 0) return 'no value and no error'
  if (value !== null && errors.length > 0) return `a value in spite of the error: ${errors[0].message}`
  for (const { code, file, message, span } of diagnostics) {
    const isPlace = Number.isInteger(span.start) && Number.isInteger(span.end)
    if (file !== 'fuzzed') return `${code}: a diagnostic of another file: ${file}`
    if (message === '' || /\bundefined\b|\bNaN\b|\[object /.test(message))
      return `${code}: a broken message: ${message}`
    if (!isPlace || span.start < 0 || span.end < span.start || span.end > length) {
      return `${code}: a diagnostic without a place in the text: ${span.start} to ${span.end} of ${length}`
    }
  }
  return null
}
