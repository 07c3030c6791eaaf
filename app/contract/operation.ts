import type { z } from 'zod'

/** An operation is data: what goes in, what comes out, and whether it changes anything. */
export type Operation = {
  readonly kind: 'query' | 'command'
  readonly input: z.ZodType
  readonly output: z.ZodType
}

export function query<I extends z.ZodType, O extends z.ZodType>(input: I, output: O) {
  return { kind: 'query', input, output } as const
}

export function command<I extends z.ZodType, O extends z.ZodType>(input: I, output: O) {
  return { kind: 'command', input, output } as const
}
