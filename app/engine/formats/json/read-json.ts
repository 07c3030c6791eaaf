import { closestName } from '../../source/closest-name.ts'
import {
  type Diagnostic,
  type DiagnosticCode,
  MAX_DIAGNOSTICS,
  type Reading,
} from '../../source/diagnostic.ts'
import type { Source, Span } from '../../source/source.ts'
import { type JsonNode, parseJson } from './parse-json.ts'

/** What a value in a JSON file may be. `either` is decided by the kind of JSON value, so its shapes must differ in it. */
export type Shape =
  NumberShape | TextShape | BooleanShape | ListShape | ObjectShape | OrNullShape | EitherShape

/** Limits are inclusive (`min`, `max`) or exclusive (`above`, `below`). */
export type NumberShape = {
  readonly kind: 'number'
  readonly min?: number
  readonly max?: number
  readonly above?: number
  readonly below?: number
  readonly whole?: boolean
}
export type TextShape = { readonly kind: 'text'; readonly oneOf?: readonly string[] }
export type BooleanShape = { readonly kind: 'boolean' }
export type ListShape = {
  readonly kind: 'list'
  readonly of: Shape
  readonly minItems?: number
  readonly maxItems?: number
}
export type ObjectShape = {
  readonly kind: 'object'
  readonly keys: Keys
  readonly required?: readonly string[]
}
export type OrNullShape = { readonly kind: 'or-null'; readonly of: Shape }
export type EitherShape = { readonly kind: 'either'; readonly of: readonly Shape[] }

/** The keys that an object may have. */
export type Keys = { readonly [name: string]: Shape }

/** The plain value that a shape lets through; unknown where the shape is known at run time only. */
export type ValueOf<S extends Shape> = Shape extends S
  ? unknown
  : S extends NumberShape
    ? number
    : S extends { kind: 'text'; oneOf: readonly (infer Word)[] }
      ? Word
      : S extends TextShape
        ? string
        : S extends BooleanShape
          ? boolean
          : S extends { kind: 'list'; of: infer Item extends Shape }
            ? readonly ValueOf<Item>[]
            : S extends { kind: 'object'; keys: infer K extends Keys; required: readonly (infer R)[] }
              ? { readonly [Name in keyof K as Name extends R ? Name : never]: ValueOf<K[Name]> } & ValuesOf<
                  Omit<K, R & string>
                >
              : S extends { kind: 'object'; keys: infer K extends Keys }
                ? ValuesOf<K>
                : S extends { kind: 'or-null'; of: infer Inner extends Shape }
                  ? ValueOf<Inner> | null
                  : S extends { kind: 'either'; of: readonly (infer Inner extends Shape)[] }
                    ? ValueOf<Inner>
                    : never

/** Every key is optional; a key that the file does not have is missing in the value too. */
export type ValuesOf<K extends Keys> = { readonly [Name in keyof K]?: ValueOf<K[Name]> }

export type JsonObject<K extends Keys> = {
  readonly values: ValuesOf<K>
  /** Where the value under a path stands, such as `spanOf('together', 2, 0)`; the nearest thing around it where it is missing. */
  spanOf(...path: readonly (string | number)[]): Span
}

/**
 * Reads one JSON object whose keys and values must fit the shapes given. `what` names the file's role in messages, such
 * as "tester file". Every misfit is collected; the value is null when there is one.
 * Codes: those of parseJson, 'wrong-type', 'out-of-range', 'unknown-name' (with "did you mean"), 'missing-name',
 * 'duplicate-declaration', 'too-many'.
 */
export function readJsonObject<const K extends Keys>(
  source: Source,
  what: string,
  keys: K,
): Reading<JsonObject<K>> {
  const parsed = parseJson(source)
  const root = parsed.value
  if (root === null) return { value: null, diagnostics: parsed.diagnostics }

  const diagnostics: Diagnostic[] = []
  const values = check(root, { kind: 'object', keys }, `the ${what}`)
  if (diagnostics.length > 0) return { value: null, diagnostics }
  return { value: { values: values as ValuesOf<K>, spanOf: (...path) => spanAlong(root, path) }, diagnostics }

  function report(code: DiagnosticCode, span: Span, message: string, hint?: string): void {
    if (diagnostics.length > MAX_DIAGNOSTICS) return
    const finding = { severity: 'error', file: source.name, span } as const
    if (diagnostics.length === MAX_DIAGNOSTICS) {
      diagnostics.push({
        ...finding,
        code: 'too-many',
        message: `more than ${MAX_DIAGNOSTICS} findings; the rest is left out`,
      })
    } else {
      diagnostics.push(
        hint === undefined ? { ...finding, code, message } : { ...finding, code, message, hint },
      )
    }
  }

  function check(node: JsonNode, shape: Shape, name: string, allowed = shape): unknown {
    if (shape.kind === 'or-null') return node.kind === 'null' ? null : check(node, shape.of, name, allowed)
    if (shape.kind === 'either') {
      const fitting = shape.of.find((one) => one.kind === node.kind)
      if (fitting !== undefined) return check(node, fitting, name, allowed)
    } else if (shape.kind === 'object' && node.kind === 'object') {
      return checkObject(node, shape, name)
    } else if (shape.kind === 'list' && node.kind === 'list') {
      checkLimits(node, node.items.length, shape, name)
      return node.items.map((item, at) => check(item, shape.of, `value ${at + 1} of ${name}`))
    } else if (shape.kind === 'text' && node.kind === 'text') {
      checkWord(node, node.text, shape, name)
      return node.text
    } else if (shape.kind === 'number' && node.kind === 'number') {
      checkLimits(node, node.number, shape, name)
      return node.number
    } else if (shape.kind === 'boolean' && node.kind === 'boolean') {
      return node.boolean
    }
    report('wrong-type', node.span, `${name} is ${described(node)}; ${expectation(allowed)} is expected`)
    return undefined
  }

  function checkObject(node: JsonNode & { kind: 'object' }, shape: ObjectShape, name: string): object {
    const value: Record<string, unknown> = {}
    for (const member of node.members) {
      if (!Object.hasOwn(shape.keys, member.name)) {
        const names = Object.keys(shape.keys)
        const meant = closestName(member.name, names)
        const hint = meant === null ? `The names known here: ${names.join(', ')}` : `Did you mean "${meant}"?`
        report('unknown-name', member.nameSpan, `${name} has no "${member.name}"`, hint)
      } else if (Object.hasOwn(value, member.name)) {
        report(
          'duplicate-declaration',
          member.nameSpan,
          `"${member.name}" is given twice`,
          'Remove one of them',
        )
      } else {
        value[member.name] = check(member.value, shape.keys[member.name], `"${member.name}"`)
      }
    }
    for (const needed of shape.required ?? []) {
      if (!Object.hasOwn(value, needed)) report('missing-name', node.span, `${name} lacks "${needed}"`)
    }
    return value
  }

  function checkLimits(node: JsonNode, figure: number, shape: NumberShape | ListShape, name: string): void {
    const fits =
      shape.kind === 'list'
        ? figure >= (shape.minItems ?? 0) && figure <= (shape.maxItems ?? Infinity)
        : figure >= (shape.min ?? -Infinity) &&
          figure <= (shape.max ?? Infinity) &&
          figure > (shape.above ?? -Infinity) &&
          figure < (shape.below ?? Infinity) &&
          (shape.whole !== true || Number.isSafeInteger(figure))
    if (fits) return
    const has = shape.kind === 'list' ? `has ${figure} values` : `is ${figure}`
    report('out-of-range', node.span, `${name} ${has}; ${expectation(shape)} is expected`)
  }

  function checkWord(node: JsonNode, word: string, shape: TextShape, name: string): void {
    if (shape.oneOf === undefined || shape.oneOf.includes(word)) return
    const meant = closestName(word, shape.oneOf)
    const hint = meant === null ? undefined : `Did you mean "${meant}"?`
    report('unknown-name', node.span, `${name} is "${word}"; ${expectation(shape)} is expected`, hint)
  }
}

function spanAlong(root: JsonNode, path: readonly (string | number)[]): Span {
  let node = root
  for (const step of path) {
    const next: JsonNode | undefined =
      node.kind === 'object'
        ? node.members.find((member) => member.name === step)?.value
        : node.kind === 'list'
          ? node.items[Number(step)]
          : undefined
    if (next === undefined) break
    node = next
  }
  return node.span
}

function described(node: JsonNode): string {
  switch (node.kind) {
    case 'object':
      return 'an object'
    case 'list':
      return 'a list'
    case 'text':
      return `the text "${node.text.length > 40 ? `${node.text.slice(0, 40)}…` : node.text}"`
    case 'number':
      return `the number ${node.number}`
    case 'boolean':
      return `${node.boolean}`
    case 'null':
      return 'null'
  }
}

/** Returns what a shape lets through, in words. */
function expectation(shape: Shape): string {
  switch (shape.kind) {
    case 'number':
      return `${shape.whole === true ? 'a whole number' : 'a number'}${limitsInWords(shape)}`
    case 'text':
      return shape.oneOf === undefined
        ? 'a text in quotation marks'
        : shape.oneOf.map((word) => `"${word}"`).join(' or ')
    case 'boolean':
      return 'true or false'
    case 'list': {
      const { minItems, maxItems } = shape
      if (minItems !== undefined && minItems === maxItems) return `a list of ${minItems}`
      if (minItems !== undefined) return `a list of ${minItems} or more`
      return maxItems === undefined ? 'a list' : `a list of at most ${maxItems}`
    }
    case 'object':
      return `an object with ${Object.keys(shape.keys).join(', ')}`
    case 'or-null':
      return `${expectation(shape.of)}, or null,`
    case 'either':
      return shape.of.map(expectation).join(' or ')
  }
}

function limitsInWords({ min, max, above, below }: NumberShape): string {
  if (min !== undefined && max !== undefined) return ` from ${min} to ${max}`
  const limits: string[] = []
  if (min !== undefined) limits.push(`of ${min} or more`)
  if (above !== undefined) limits.push(`above ${above}`)
  if (max !== undefined) limits.push(`up to ${max}`)
  if (below !== undefined) limits.push(`below ${below}`)
  return limits.length === 0 ? '' : ` ${limits.join(' and ')}`
}
