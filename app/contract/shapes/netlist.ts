import { z } from 'zod'
import { diagnosticShape } from './diagnostic.ts'
import { atMsShape, idShape, nameShape, noteShape } from './ids.ts'

const count = z.number().int().nonnegative()

export const testPinShape = z.object({
  name: z.string(),
  role: z.enum(['clock', 'reset', 'scan-enable', 'scan-in', 'fixed']),
  value: z.union([z.literal(0), z.literal(1), z.literal('X')]),
  from: z.enum(['library', 'patterns', 'user']),
})

/** What a netlist reader understood, for the import page. */
export const netlistAccountShape = z.object({
  format: z.string(),
  top: z.string(),
  /** Other modules that could be the top. */
  tops: z.array(z.string()),
  inputs: count,
  outputs: count,
  flipFlops: count,
  gates: count,
  nets: count,
  lines: count,
  base: z.enum(['lines', 'cell pins']),
  faults: count,
  collapsedFaults: count,
  chains: z.array(z.object({ name: z.string(), scanIn: z.string(), scanOut: z.string(), length: count })),
  cellsUsed: z.array(z.object({ cell: z.string(), count })),
  cellsUnknown: z.array(z.object({ cell: z.string(), count })),
  unusable: z.array(z.object({ kind: z.string(), count, examples: z.array(z.string()) })),
  /**
   * What sources of X cost in coverage, estimated with random patterns: by kind alone, and together. Null where there are
   * none or the netlist is too large; absent in accounts of older versions.
   */
  unusableCosts: z
    .object({
      nPatterns: count,
      seed: count,
      faults: count,
      coverage: z.number(),
      kinds: z.array(z.object({ kind: z.string(), coverage: z.number() })),
      together: z.number(),
    })
    .nullable()
    .optional(),
  testPins: z.array(testPinShape),
  assumeScanned: z.boolean(),
})

export const netlistInspectionShape = z.object({
  inspectionId: z.string(),
  files: z.array(z.string()),
  /** Null where an error stands in the way: nothing can be saved then. */
  account: netlistAccountShape.nullable(),
  diagnostics: z.array(diagnosticShape),
})

export const netlistRevisionShape = z.object({
  id: idShape,
  productId: idShape,
  name: nameShape,
  note: noteShape,
  createdAtMs: atMsShape,
  files: z.array(z.string()),
  sha256: z.string(),
  account: netlistAccountShape,
  warnings: count,
})

export type TestPinView = z.infer<typeof testPinShape>
export type NetlistAccount = z.infer<typeof netlistAccountShape>
export type NetlistInspection = z.infer<typeof netlistInspectionShape>
export type NetlistRevision = z.infer<typeof netlistRevisionShape>
