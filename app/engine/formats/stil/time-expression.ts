const UNITS: Readonly<Record<string, number>> = {
  '': 1,
  s: 1,
  ms: 1e-3,
  us: 1e-6,
  ns: 1e-9,
  ps: 1e-12,
  fs: 1e-15,
}

const MAX_DEPTH = 32

/**
 * Returns a time expression in seconds, NaN where it can't be worked out: numbers with units, variables of the Spec
 * block, `@` for the event before, + − * / and parentheses (IEEE 1450-1999, clause 6.13).
 */
export function evaluateTime(
  text: string,
  specs: ReadonlyMap<string, string>,
  previous: number,
  depth = 0,
): number {
  if (depth > MAX_DEPTH) return NaN
  const tokens = text.match(/\d+\.?\d*(?:[eE][-+]?\d+)?\s*[a-zA-Z]*|[A-Za-z_]\w*|\S/g) ?? []
  let at = 0
  let nesting = 0
  const value = sum()
  return at === tokens.length ? value : NaN

  function sum(): number {
    let total = product()
    for (;;) {
      const sign = tokens[at]
      if (sign !== '+' && sign !== '-') return total
      at++
      total += sign === '+' ? product() : -product()
    }
  }

  function product(): number {
    let total = factor()
    for (;;) {
      const sign = tokens[at]
      if (sign !== '*' && sign !== '/') return total
      at++
      total = sign === '*' ? total * factor() : total / factor()
    }
  }

  function factor(): number {
    const token = tokens[at++]
    if (token === undefined || nesting > MAX_DEPTH) return NaN
    if (token === '(') {
      nesting++
      const inner = sum()
      nesting--
      return tokens[at++] === ')' ? inner : NaN
    }
    if (token === '-' || token === '+') {
      nesting++
      const inner = factor()
      nesting--
      return token === '-' ? -inner : inner
    }
    if (token === '@') return previous
    const number = /^(\d+\.?\d*(?:[eE][-+]?\d+)?)\s*([a-zA-Z]*)$/.exec(token)
    if (number !== null) return Number(number[1]) * (UNITS[number[2] ?? ''] ?? NaN)
    const variable = specs.get(token)
    return variable === undefined ? NaN : evaluateTime(variable, specs, previous, depth + 1)
  }
}
