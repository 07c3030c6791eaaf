import { z } from 'zod'

/** A reader's finding with its place and caret frame, as shown on screens and terminals. */
export const diagnosticShape = z.object({
  code: z.string(),
  severity: z.enum(['error', 'warning', 'note']),
  file: z.string(),
  line: z.number().int().positive(),
  column: z.number().int().positive(),
  message: z.string(),
  hint: z.string().nullable(),
  notes: z.array(
    z.object({ file: z.string(), line: z.number().int(), column: z.number().int(), message: z.string() }),
  ),
  frame: z.string(),
})

export type DiagnosticView = z.infer<typeof diagnosticShape>
