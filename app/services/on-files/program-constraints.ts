import { basename } from 'node:path'
import { AppError } from '../../contract/errors.ts'
import type { ChoiceBasis } from '../../engine/choose/choice-basis.ts'
import { compileRules } from '../../engine/choose/choice-rules.ts'
import { NO_CONSTRAINTS, type Constraints } from '../../engine/choose/constraints.ts'
import type { PatternSet } from '../../engine/simulate/pattern-set.ts'
import { matchProgram, type ProgramRow } from '../../engine/tester/program.ts'

/**
 * Returns the rows of a test program list with each burst of the set under its own name: a burst that is a whole file may be
 * named by the file, with or without its folder, in either column.
 */
export function rowsByBurst(
  program: readonly ProgramRow[],
  { bursts }: Pick<PatternSet, 'bursts'>,
): readonly ProgramRow[] {
  return program.map((row) => {
    const named = [row.burst, row.file].map((name) => basename(name))
    const burst =
      bursts.find(({ name }) => name === row.burst) ??
      bursts.find(({ name }) => named.includes(basename(name)))
    return burst === undefined ? row : { ...row, burst: burst.name }
  })
}

/**
 * Returns the basis with what the test program list imposes on bursts of the set: patterns of a burst that must stay are
 * kept, those of one that must be first run first. Throws AppError 'bad-input' where that contradicts the constraints.
 */
export function withProgram(
  basis: ChoiceBasis,
  program: readonly ProgramRow[],
  patterns: PatternSet,
  patternFile: string,
): ChoiceBasis {
  const { rowOf } = matchProgram(program, patterns, patternFile)
  const patternsWhere = (isMeant: (row: ProgramRow) => boolean): number[] =>
    patterns.bursts.flatMap(({ first, count }, burst) => {
      const row = rowOf[burst] ?? null
      return row !== null && isMeant(row) ? Array.from({ length: count }, (_, at) => first + at) : []
    })
  const keep = patternsWhere(({ mustStay }) => mustStay)
  const first = patternsWhere(({ mustBeFirst }) => mustBeFirst)
  if (keep.length === 0 && first.length === 0) return basis
  const given = basis.constraints?.constraints ?? NO_CONSTRAINTS
  const constraints: Constraints = {
    ...given,
    keep: [...given.keep, ...keep],
    first: [...first, ...given.first.filter((pattern) => !first.includes(pattern))],
  }
  const { rules, contradiction } = compileRules(constraints, patterns.nPatterns)
  if (rules === null) {
    throw new AppError(
      'bad-input',
      `The test program list and the constraints contradict each other: ${contradiction.message}. ${contradiction.hint}.`,
    )
  }
  return {
    ...basis,
    task: { ...basis.task, rules },
    constraints: { constraints, rules, parts: basis.constraints?.parts ?? [] },
  }
}
