import { createRandom } from '../../app/engine/source/random.ts'

export type PatternPlan = {
  readonly width: number
  readonly seed: number
  /** Parts of the set, one after the other. */
  readonly parts: readonly {
    readonly comment: string
    readonly count: number
    /** The chance of a 1, a value for each run of inputs; inputs past the last run have 0.5. */
    readonly chances: readonly { readonly inputs: number; readonly one: number }[]
    /** Inputs that take the value of others, but for a share that flips. */
    readonly copy?: {
      readonly from: number
      readonly to: number
      readonly inputs: number
      readonly flipped: number
    }
  }[]
}

/** Writes a vectors file of weighted random patterns. */
export function writePatterns(title: string, { width, seed, parts }: PatternPlan): string {
  const random = createRandom(seed)
  const lines = [`# ${title}`]
  for (const { comment, count, chances, copy } of parts) {
    lines.push(`# ${comment}`)
    const chance = chances.flatMap(({ inputs, one }) => Array.from({ length: inputs }, () => one))
    for (let pattern = 0; pattern < count; pattern++) {
      const values = Array.from({ length: width }, (_, input) => random.fraction() < (chance[input] ?? 0.5))
      for (let at = 0; at < (copy?.inputs ?? 0); at++) {
        const flip = random.fraction() < (copy?.flipped ?? 0)
        values[(copy?.to ?? 0) + at] = values[(copy?.from ?? 0) + at] !== flip
      }
      lines.push(values.map((value) => (value ? '1' : '0')).join(''))
    }
  }
  return lines.join('\n') + '\n'
}
