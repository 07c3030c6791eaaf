import { z } from 'zod'
import { atMsShape, idShape, nameShape, noteShape } from './ids.ts'

/**
 * Values of the tester's or product's fields by key, as in tester.json and product.json; a key that is absent has its
 * stated default. Ranges and units stand in the field table, which the services check them against.
 */
export const fieldValuesShape = z.record(z.string(), z.union([z.number(), z.string(), z.null()]))

/** What a form, a document and a reader need to know of one field. */
export const fieldShape = z.object({
  key: z.string(),
  label: z.string(),
  unit: z.string(),
  /** `shares`: a text with a line for each block, `core/alu,0.4`. */
  kind: z.enum(['number', 'integer', 'text', 'choice', 'shares']),
  choices: z.array(z.object({ value: z.string(), label: z.string() })),
  min: z.number().nullable(),
  max: z.number().nullable(),
  /** True where min itself is not allowed. */
  openMin: z.boolean(),
  default: z.union([z.number(), z.string(), z.null()]),
  explanation: z.string(),
})

export const fieldErrorShape = z.object({ key: z.string(), message: z.string() })

export const testerShape = z.object({
  id: idShape,
  name: nameShape,
  note: noteShape,
  values: fieldValuesShape,
})

/** What a product's cut must respect; each may be absent (null). */
export const limitsShape = z.object({
  maxMilliseconds: z.number().positive().nullable(),
  minCoverage: z.number().min(0).max(1).nullable(),
  maxDppm: z.number().positive().nullable(),
})

export const productShape = z.object({
  id: idShape,
  name: nameShape,
  note: noteShape,
  createdAtMs: atMsShape,
  values: fieldValuesShape,
  limits: limitsShape,
  testerId: idShape.nullable(),
})

export type FieldValues = z.infer<typeof fieldValuesShape>
export type Field = z.infer<typeof fieldShape>
export type FieldError = z.infer<typeof fieldErrorShape>
export type TesterRecord = z.infer<typeof testerShape>
export type Limits = z.infer<typeof limitsShape>
export type ProductRecord = z.infer<typeof productShape>
