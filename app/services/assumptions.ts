import { shareProblem, sharesOfText } from './area-share-text.ts'
import { INPUT_WORDS } from '../contract/plan-words.ts'
import type { Field, FieldError, FieldValues } from '../contract/shapes/model.ts'
import type { NumberShape, Shape } from '../engine/formats/json/read-json.ts'
import {
  PRODUCT_FIELDS,
  productContradictions,
  type Product,
  type RangeInput,
} from '../engine/quality/product.ts'
import {
  type AssumptionField,
  type Contradiction,
  defaultsOf,
  fieldProblem,
} from '../engine/tester/assumption-field.ts'
import { TESTER_FIELDS, testerContradictions, type Tester } from '../engine/tester/tester.ts'

/** The name stands in the record itself; lists of objects stand in files only, but for shares of area. */
function isInForms({ key, shape }: AnyField): boolean {
  const inner = shape.kind === 'or-null' ? shape.of : shape
  return key !== 'name' && (key === SHARES || !(inner.kind === 'list' && inner.of.kind === 'object'))
}

const SHARES = 'areaShares'

/** A field of either file, where it does not matter of which. */
type AnyField = AssumptionField<Record<string, unknown>>

type Resolved<T> = { readonly values: T; readonly errors: readonly FieldError[] }

/**
 * Returns the fields that a form has for one of a file: the field itself, or where its value has keys of its own, such as
 * the ranges, one for each: `ranges.yield`.
 */
function partsOf(field: AnyField): readonly AnyField[] {
  const { shape } = field
  const inner = shape.kind === 'or-null' ? shape.of : shape
  if (inner.kind !== 'object') return [field]
  return Object.entries(inner.keys).map(([key, of]) => ({
    ...field,
    key: `${field.key}.${key}`,
    label: `Range of ${INPUT_WORDS[key as RangeInput].toLowerCase()}`,
    shape: { kind: 'or-null', of },
    nullMeans: '± 20 %',
    explanation: `Lowest and highest to be reckoned with, such as "${EXAMPLES[key as RangeInput]}".`,
  }))
}

const EXAMPLES: Readonly<Record<RangeInput, string>> = {
  yield: '0.9 to 0.95',
  n0: '1 to 3',
  escapeCost: '10 to 40',
  costPerHour: '120 to 180',
  sites: '4 to 8',
  shiftMHz: '10 to 25',
}

/** Returns the fields that forms show of products and of testers. */
export function formFields(): { product: Field[]; tester: Field[] } {
  const fieldsOf = (fields: readonly AnyField[]): Field[] =>
    fields.filter(isInForms).flatMap(partsOf).map(fieldOf)
  return { product: fieldsOf(PRODUCT_FIELDS), tester: fieldsOf(TESTER_FIELDS) }
}

/** Returns the tester that values make, defaults where they say nothing, and what does not fit. */
export function resolveTester(name: string, values: FieldValues): Resolved<Tester> {
  return resolve(TESTER_FIELDS, { ...values, name }, testerContradictions)
}

/** Returns the product that values make, defaults where they say nothing, and what does not fit. */
export function resolveProduct(name: string, values: FieldValues): Resolved<Product> {
  return resolve(PRODUCT_FIELDS, { ...values, name }, productContradictions)
}

/**
 * Puts changes over values: what fits is taken, what does not is refused with its reason. Null takes a field back to its
 * default.
 */
export function changeValues(
  of: 'product' | 'tester',
  values: FieldValues,
  changes: FieldValues,
): { readonly values: FieldValues; readonly errors: readonly FieldError[] } {
  const fields: readonly AnyField[] = of === 'product' ? PRODUCT_FIELDS : TESTER_FIELDS
  const next = { ...values }
  const errors: FieldError[] = []
  for (const [key, value] of Object.entries(changes)) {
    const field = formField(fields, key)
    if (field === undefined) {
      errors.push({ key, message: `There is no field "${key}".` })
      continue
    }
    if (value === null) {
      Reflect.deleteProperty(next, key)
      continue
    }
    const problem = problemOf(field, value)
    if (problem === null) next[key] = value
    else errors.push({ key, message: asSentence(problem) })
  }
  return { values: next, errors }
}

/** What else is wrong with a record's values together, for the form that shows them. */
export function contradictionsOf(of: 'product' | 'tester', values: FieldValues): readonly FieldError[] {
  return of === 'product' ? resolveProduct('', values).errors : resolveTester('', values).errors
}

function resolve<T>(
  fields: readonly AssumptionField<T>[],
  values: FieldValues,
  contradictions: (values: T) => readonly Contradiction<T>[],
): Resolved<T> {
  const given: Record<string, unknown> = {}
  const errors: FieldError[] = []
  const parts = (fields as readonly AnyField[]).flatMap(partsOf)
  const defaults = defaultsOf(fields)
  for (const [key, value] of Object.entries(values)) {
    const field = parts.find((one) => one.key === key)
    if (field === undefined || value === null) continue
    const inFile = fileValue(field.shape, value)
    const problem = problemOf(field, value)
    if (problem !== null) {
      errors.push({ key, message: asSentence(problem) })
      continue
    }
    const [whole = key, part] = key.split('.')
    given[whole] = part === undefined ? inFile : { ...(given[whole] as object), [part]: inFile }
  }
  const resolved = { ...defaults, ...given }
  for (const { key, message, hint } of contradictions(resolved)) {
    errors.push({ key, message: `${asSentence(message)} ${hint}.` })
  }
  return { values: resolved, errors }
}

function problemOf(field: AnyField, value: string | number): string | null {
  const inFile = fileValue(field.shape, value)
  const ofShares = field.key === SHARES && typeof value === 'string' ? shareProblem(value) : null
  if (ofShares !== null) return ofShares
  const example = EXAMPLES[field.key.split('.')[1] as RangeInput] as string | undefined
  if (example !== undefined) {
    const [low, high] = Array.isArray(inFile) && inFile.length === 2 ? (inFile as number[]) : []
    if (!((low ?? NaN) <= (high ?? NaN))) {
      return `"${field.key}" is ${value}; two numbers, the lower first, such as ${example}, are expected`
    }
  }
  return fieldProblem<Record<string, unknown>>(field, inFile)
}

function formField(fields: readonly AnyField[], key: string): AnyField | undefined {
  return fields
    .filter(isInForms)
    .flatMap(partsOf)
    .find((field) => field.key === key)
}

function fieldOf({ key, label, unit, shape, default: value, nullMeans, explanation }: AnyField): Field {
  const inner = shape.kind === 'or-null' ? shape.of : shape
  const limits: NumberShape = inner.kind === 'number' ? inner : { kind: 'number' }
  const words = choicesOf(inner)
  return {
    key,
    label,
    unit,
    kind:
      key === SHARES
        ? 'shares'
        : words.length > 0
          ? 'choice'
          : inner.kind === 'number'
            ? inner.whole
              ? 'integer'
              : 'number'
            : 'text',
    choices: words.map((word) => ({ value: word, label: CHOICE_LABELS[word] ?? word })),
    min: limits.above ?? limits.min ?? null,
    max: limits.max ?? null,
    openMin: limits.above !== undefined,
    default: typeof value === 'boolean' ? YES_NO[value ? 0 : 1] : (value as Field['default']),
    explanation: nullMeans === '' ? explanation : `${explanation} Empty: ${nullMeans}.`,
  }
}

const YES_NO = ['yes', 'no'] as const

const CHOICE_LABELS: Readonly<Record<string, string>> = {
  yes: 'Yes',
  no: 'No',
  'williams-brown': 'Williams and Brown 1981',
  'agrawal-seth-agrawal': 'Agrawal, Seth and Agrawal 1982',
}

function choicesOf(shape: Shape): readonly string[] {
  if (shape.kind === 'boolean') return YES_NO
  return shape.kind === 'text' ? (shape.oneOf ?? []) : []
}

/** Returns a form's value as a file has it: yes and no as booleans, "0.9 to 0.95" as a list. */
function fileValue(shape: Shape, value: string | number | null): unknown {
  const inner = shape.kind === 'or-null' ? shape.of : shape
  if (inner.kind === 'boolean') return value === 'yes' ? true : value === 'no' ? false : value
  if (inner.kind === 'list' && inner.of.kind === 'object') {
    return typeof value === 'string' ? sharesOfText(value) : value
  }
  if (inner.kind === 'list' && typeof value === 'string') {
    return value.split(/\s*(?:to|–|,|;)\s*/).map((part) => (part === '' ? null : Number(part)))
  }
  return value
}

function asSentence(text: string): string {
  return `${text.charAt(0).toUpperCase()}${text.slice(1)}${/[.!?]$/.test(text) ? '' : '.'}`
}
