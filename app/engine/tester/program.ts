import type { PatternFacts, BurstMeasure, TimeModel } from './time-model.ts'
import { timeColumns } from './time-model.ts'
import { correctionFactor } from './measured-time.ts'

/** One row of a test program list: a burst of patterns or any other part of the program. */
export type ProgramRow = {
  readonly burst: string
  /** What it is in the user's own word, such as scan, memory, analogue. */
  readonly kind: string
  /** The pattern file, empty for parts without patterns. */
  readonly file: string
  /** How many patterns the measured time is of; null where not given. */
  readonly patterns: number | null
  /** Measured on one site, set-up not included; null where not measured. */
  readonly measuredMs: number | null
  /** Null: the product's set-up for bursts of the pattern set, none for other parts. */
  readonly setupMs: number | null
  readonly mustStay: boolean
  readonly mustBeFirst: boolean
}

/** What a test program list says about a pattern set and the program around it. */
export type ProgramFacts = {
  /** Measured time and set-up of all parts that are no bursts of the set: they count in every total. */
  readonly fixedMs: number
  /** One a burst of the set, null where no row names it. */
  readonly rowOf: readonly (ProgramRow | null)[]
}

/** Finds the row of each burst by its name; a list with one row for the whole set may name the file instead. */
export function matchProgram(
  rows: readonly ProgramRow[],
  patterns: PatternFacts,
  fileName: string,
): ProgramFacts {
  const rowOf = patterns.bursts.map(
    ({ name }) =>
      rows.find(({ burst }) => burst === name) ??
      (patterns.bursts.length === 1
        ? rows.find(({ file }) => file !== '' && file === fileName)
        : undefined) ??
      null,
  )
  const fixed = rows.filter((row) => !rowOf.includes(row))
  return {
    fixedMs: fixed.reduce((sum, { measuredMs, setupMs }) => sum + (measuredMs ?? 0) + (setupMs ?? 0), 0),
    rowOf,
  }
}

/**
 * Returns what each burst's row makes of its time: its own set-up, and measured over computed time of all of its
 * patterns. `computed` is the model without corrections. A measurement of another number of patterns than the burst has
 * says nothing of this one and is not used.
 */
export function burstMeasures(
  program: ProgramFacts,
  patterns: PatternFacts,
  computed: TimeModel,
  general: BurstMeasure,
): readonly (BurstMeasure | null)[] {
  return patterns.bursts.map((burst, b) => {
    const row = program.rowOf[b]
    if (row === null) return null
    const setupMs = row.setupMs ?? general.setupMs
    const isOfThisBurst = row.patterns === null || row.patterns === burst.count
    if (row.measuredMs === null || !isOfThisBurst || burst.count === 0) {
      return { setupMs, correction: general.correction }
    }
    const sequence = Uint32Array.from({ length: burst.count }, (_, at) => burst.first + at)
    const { milliseconds } = timeColumns(computed, sequence, false, 0)
    const ownMs = milliseconds[burst.count] - computed.burstSetupMs[b]
    return { setupMs, correction: correctionFactor(row.measuredMs, ownMs) }
  })
}
