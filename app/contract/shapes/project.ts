import { z } from 'zod'
import { atMsShape, idShape, nameShape } from './ids.ts'

export const recentProjectShape = z.object({
  path: z.string(),
  name: z.string(),
  openedAtMs: atMsShape,
  /** False where the file is no longer at its path. */
  found: z.boolean(),
  /** What is in it, in words: "3 products, 14 runs". */
  summary: z.string(),
})

export const projectShape = z.object({
  path: z.string(),
  name: nameShape,
  readOnly: z.boolean(),
  /** Why it is read-only, or what was mended on opening; null where there is nothing to say. */
  notice: z.string().nullable(),
  products: z.array(
    z.object({
      id: idShape,
      name: nameShape,
      /** Coverage of the budget in use, 0..1; null where there is none yet. */
      coverage: z.number().min(0).max(1).nullable(),
    }),
  ),
  testers: z.number().int().nonnegative(),
})

export type RecentProject = z.infer<typeof recentProjectShape>
export type Project = z.infer<typeof projectShape>
