import { z } from 'zod'
import { diagnosticShape } from './diagnostic.ts'
import { atMsShape, idShape, nameShape, noteShape } from './ids.ts'

const count = z.number().int().nonnegative()

/** What a pattern reader understood, for the import page. */
export const patternAccountShape = z.object({
  format: z.string(),
  patterns: count,
  /** Patterns that count for time alone, with why. */
  timeOnly: z.object({ patterns: count, reasons: z.array(z.string()) }),
  unknownInputs: count,
  bursts: z.array(z.object({ name: z.string(), patterns: count })),
  /** Total tester cycles where the file itself tells them, else null. */
  cyclesGiven: count.nullable(),
  /** Expected values compared with the good machine; null where the file expects nothing. */
  expected: z
    .object({
      compared: count,
      mismatches: count,
      first: z.array(
        z.object({ pattern: count, output: z.string(), expected: z.string(), simulated: z.string() }),
      ),
    })
    .nullable(),
  signalsUnmatched: z.array(z.string()),
})

export const patternInspectionShape = z.object({
  inspectionId: z.string(),
  files: z.array(z.string()),
  account: patternAccountShape.nullable(),
  diagnostics: z.array(diagnosticShape),
})

export const patternSetRevisionShape = z.object({
  id: idShape,
  productId: idShape,
  /** The netlist revision that it was read against. */
  netlistId: idShape,
  name: nameShape,
  note: noteShape,
  createdAtMs: atMsShape,
  files: z.array(z.string()),
  sha256: z.string(),
  account: patternAccountShape,
  warnings: count,
})

export type PatternAccount = z.infer<typeof patternAccountShape>
export type PatternInspection = z.infer<typeof patternInspectionShape>
export type PatternSetRevision = z.infer<typeof patternSetRevisionShape>
