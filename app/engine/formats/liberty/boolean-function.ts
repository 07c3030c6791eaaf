import type { CellFunction } from '../../circuit/cell-library.ts'

const MAX_NESTING = 200

/** What is wrong with a function, at an offset into its text. */
export type FunctionFault = {
  readonly kind: 'syntax' | 'unknown-name' | 'limit'
  readonly at: number
  readonly length: number
  readonly message: string
}

/**
 * Parses a Liberty boolean expression:
 *
 *     or     = and { ( "+" | "|" | "||" ) and }
 *     and    = xor { [ "*" | "&" | "&&" ] xor }                  two operands side by side are an AND
 *     xor    = factor { "^" factor }
 *     factor = { "!" | "~" } ( name | "0" | "1" | "(" or ")" ) { "'" }
 *
 * An inversion binds before everything, then XOR, AND, OR, as the Liberty reference orders them. `variableOf` gives a name's variable,
 * or −1. Returns the function, or the first fault.
 */
export function parseFunction(
  text: string,
  variableOf: (name: string) => number,
): CellFunction | FunctionFault {
  return new FunctionParser(text, variableOf).parse()
}

/** True for a fault, false for a function. */
export function isFault(result: CellFunction | FunctionFault): result is FunctionFault {
  return 'message' in result
}

class Fault extends Error {
  readonly fault: FunctionFault

  constructor(fault: FunctionFault) {
    super(fault.message)
    this.fault = fault
  }
}

class FunctionParser {
  private at = 0
  private nesting = 0
  private readonly text: string
  private readonly variableOf: (name: string) => number

  constructor(text: string, variableOf: (name: string) => number) {
    this.text = text
    this.variableOf = variableOf
  }

  parse(): CellFunction | FunctionFault {
    try {
      const result = this.parseOr()
      if (this.sign() !== '') this.fail('expected an operator or the end of the function')
      return result
    } catch (error) {
      if (error instanceof Fault) return error.fault
      throw error
    }
  }

  private parseOr(): CellFunction {
    const operands = [this.parseAnd()]
    while (this.sign() === '+' || this.sign() === '|') {
      this.skipOperator()
      operands.push(this.parseAnd())
    }
    return operands.length === 1 ? operands[0] : { kind: 'or', of: operands }
  }

  private parseAnd(): CellFunction {
    const operands = [this.parseXor()]
    for (let sign = this.sign(); sign !== ''; sign = this.sign()) {
      if (sign === '*' || sign === '&') this.skipOperator()
      else if (sign === '+' || sign === '|' || sign === ')' || sign === '^') break
      operands.push(this.parseXor())
    }
    return operands.length === 1 ? operands[0] : { kind: 'and', of: operands }
  }

  private parseXor(): CellFunction {
    const operands = [this.parseFactor()]
    while (this.sign() === '^') {
      this.at++
      operands.push(this.parseFactor())
    }
    return operands.length === 1 ? operands[0] : { kind: 'xor', of: operands }
  }

  private parseFactor(): CellFunction {
    if (++this.nesting > MAX_NESTING) this.fail(`nested deeper than ${MAX_NESTING}`, 'limit')
    const sign = this.sign()
    let result: CellFunction
    if (sign === '!' || sign === '~') {
      this.at++
      result = { kind: 'not', of: this.parseFactor() }
    } else if (sign === '(') {
      this.at++
      result = this.parseOr()
      if (this.sign() !== ')') this.fail('expected ")"')
      this.at++
    } else result = this.parseName()
    this.nesting--
    while (this.sign() === "'") {
      this.at++
      result = { kind: 'not', of: result }
    }
    return result
  }

  private parseName(): CellFunction {
    const match = /^[A-Za-z0-9_.$\\]+(?:\[-?\d+\])?/.exec(this.text.slice(this.at, this.at + 8192))
    if (match === null) this.fail('expected a pin, 0, 1 or "("')
    const name = match[0]
    const start = this.at
    this.at += name.length
    const index = this.variableOf(name)
    if (index >= 0) return { kind: 'variable', index }
    if (name === '0' || name === '1') return { kind: 'constant', value: name === '1' ? 1 : 0 }
    throw new Fault({
      kind: 'unknown-name',
      at: start,
      length: name.length,
      message: `"${name}" is neither a pin nor a state of the cell`,
    })
  }

  /** The next character that is no white space, or "" at the end. */
  private sign(): string {
    while (this.text.charCodeAt(this.at) <= 32) this.at++
    return this.text[this.at] ?? ''
  }

  private skipOperator(): void {
    if (this.text[this.at] === this.text[this.at + 1]) this.at++
    this.at++
  }

  private fail(message: string, kind: FunctionFault['kind'] = 'syntax'): never {
    const found = this.sign()
    throw new Fault({
      kind,
      at: Math.min(this.at, this.text.length),
      length: found === '' ? 0 : 1,
      message: `${message}, found ${found === '' ? 'the end of the function' : `"${found}"`}`,
    })
  }
}
