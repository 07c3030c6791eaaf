import type { AreaShare } from '../engine/quality/product.ts'

/** Returns shares of area as a form has them: a line for each block, its name, a comma, its share. */
export function sharesOfText(text: string): AreaShare[] {
  return linesOf(text).map((line) => {
    const comma = line.lastIndexOf(',')
    const share = line.slice(comma + 1).trim()
    return { block: line.slice(0, Math.max(0, comma)).trim(), share: share === '' ? NaN : Number(share) }
  })
}

/** Returns what is wrong with the first line that gives no block and share; null where each does. */
export function shareProblem(text: string): string | null {
  const at = sharesOfText(text).findIndex(({ block, share }) => block === '' || !(share >= 0 && share <= 1))
  const wrong = sharesOfText(text)[at]
  if (wrong === undefined) return null
  if (wrong.block === '') return `block ${at + 1} has no name; the prefix of its names is expected`
  const given = linesOf(text)[at]?.split(',').at(-1)?.trim() ?? ''
  return `the share of "${wrong.block}" is ${given === '' ? 'missing' : given}; a number from 0 to 1 is expected`
}

function linesOf(text: string): string[] {
  return text.split('\n').filter((line) => line.trim() !== '')
}
