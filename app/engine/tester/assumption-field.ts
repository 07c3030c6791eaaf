import { type Keys, readJsonObject, type Shape } from '../formats/json/read-json.ts'
import type { Diagnostic, Reading } from '../source/diagnostic.ts'
import type { Source } from '../source/source.ts'

/**
 * One key of a tester or product file: the one source of truth for the reader, the forms, the docs and the report.
 * `default` is the value where the file has no such key; null is allowed only where the shape says so.
 */
export type AssumptionField<Values> = {
  readonly [Key in keyof Values & string]: {
    readonly key: Key
    readonly label: string
    /** Empty where it has none; `money` stands for the tester's currency. */
    readonly unit: string
    readonly shape: Shape
    readonly default: Values[Key]
    /** What a null stands for; empty where null is not allowed. */
    readonly nullMeans: string
    readonly explanation: string
  }
}[keyof Values & string]

/** Returns every field's default as one value. */
export function defaultsOf<Values>(fields: readonly AssumptionField<Values>[]): Values {
  return Object.fromEntries(fields.map((field) => [field.key, field.default])) as Values
}

/** Returns the shapes of fields by key, for a reader. */
export function shapesOf<Values>(fields: readonly AssumptionField<Values>[]): Keys {
  return Object.fromEntries(fields.map((field) => [field.key, field.shape]))
}

/** Returns what is wrong with a value typed into a field, or null where it fits. NaN and null do not fit a number. */
export function fieldProblem<Values>(field: AssumptionField<Values>, value: unknown): string | null {
  const text = JSON.stringify({ [field.key]: value ?? null })
  const { diagnostics } = readJsonObject({ name: field.key, text }, field.label, { [field.key]: field.shape })
  return diagnostics[0]?.message ?? null
}

/**
 * Reads a file of assumptions: the keys it has, defaults for the others, and which keys it gave (contradictions between
 * keys are for the caller to find). `contradictions` gets the values and returns findings as key and message; each is
 * reported at that key's place. The value is null when anything does not fit.
 * Codes: those of readJsonObject, and 'contradiction'.
 */
export function readAssumptions<Values>(
  source: Source,
  what: string,
  fields: readonly AssumptionField<Values>[],
  contradictions: (values: Values, given: ReadonlySet<keyof Values>) => readonly Contradiction<Values>[],
): Reading<Values> {
  const read = readJsonObject(source, what, shapesOf(fields))
  if (read.value === null) return { value: null, diagnostics: read.diagnostics }
  const { values: found, spanOf } = read.value
  const values = { ...defaultsOf(fields), ...found } as Values
  const given = new Set(Object.keys(found) as (keyof Values)[])
  const diagnostics: Diagnostic[] = contradictions(values, given).map(({ key, message, hint }) => ({
    code: 'contradiction',
    severity: 'error',
    file: source.name,
    span: spanOf(key),
    message,
    hint,
  }))
  return { value: diagnostics.length === 0 ? values : null, diagnostics }
}

export type Contradiction<Values> = {
  readonly key: keyof Values & string
  readonly message: string
  readonly hint: string
}
