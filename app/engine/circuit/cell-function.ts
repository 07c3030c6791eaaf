import type { CellFunction } from './cell-library.ts'
import { NOT_CONSTANT } from './scan-constants.ts'

/** Returns a function's value, 0, 1 or NOT_CONSTANT, from those of its variables (Kleene's three-valued logic). */
export function evaluateFunction(of: CellFunction, valueOf: (index: number) => number): number {
  switch (of.kind) {
    case 'constant':
      return of.value === 'X' ? NOT_CONSTANT : of.value
    case 'variable':
      return valueOf(of.index)
    case 'not': {
      const value = evaluateFunction(of.of, valueOf)
      return value === NOT_CONSTANT ? value : 1 - value
    }
    case 'xor': {
      let parity = 0
      for (const operand of of.of) {
        const value = evaluateFunction(operand, valueOf)
        if (value === NOT_CONSTANT) return value
        parity ^= value
      }
      return parity
    }
    default: {
      const decides = of.kind === 'and' ? 0 : 1
      let isKnown = true
      for (const operand of of.of) {
        const value = evaluateFunction(operand, valueOf)
        if (value === decides) return value
        if (value === NOT_CONSTANT) isKnown = false
      }
      return isKnown ? 1 - decides : NOT_CONSTANT
    }
  }
}

/**
 * What a flip-flop stores while its scan enable has that value: scan-in straight (false) or inverted (true), or null where it
 * stores something else.
 */
export function shiftInversion(
  next: CellFunction,
  enable: number,
  enableValue: 0 | 1,
  scanIn: number,
): boolean | null {
  const stored = ([0, 1] as const).map((value) =>
    evaluateFunction(next, (index) => {
      if (index === enable) return enableValue
      return index === scanIn ? value : NOT_CONSTANT
    }),
  )
  if (stored[0] === NOT_CONSTANT || stored[1] === NOT_CONSTANT || stored[0] === stored[1]) return null
  return stored[0] === 1
}

/** Calls back for each variable in a function, as often as it stands there. */
export function visitVariables(of: CellFunction, visit: (index: number) => void): void {
  if (of.kind === 'variable') visit(of.index)
  else if (of.kind === 'not') visitVariables(of.of, visit)
  else if (of.kind !== 'constant') for (const operand of of.of) visitVariables(operand, visit)
}
