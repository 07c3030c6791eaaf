import { expect, test } from 'vitest'
import { numberFormats } from '../../../app/contract/format-number.ts'
import type { Constraints } from '../../../app/contract/shapes/budget.ts'
import {
  constraintsInWords,
  costInWords,
  ruleReader,
  withoutRule,
  withRule,
} from '../../../renderer/components/budget/constraint-rules.ts'
import {
  constraintTexts,
  NO_TEXTS,
  readConstraintTexts,
} from '../../../renderer/components/budget/constraint-text.ts'
import { constraintTrouble, smallestWords } from '../../../renderer/components/budget/cut-words.ts'

const formats = numberFormats('en')
const ALL: Constraints = {
  keep: [3, '10-20'],
  leaveOut: ['50-52'],
  together: [[4, '7-8']],
  before: [
    [3, 9],
    ['1-2', 9],
  ],
  first: [6, 5],
}

test('constraints go through their texts and back unchanged', () => {
  const texts = constraintTexts(ALL)
  expect(texts).toEqual({
    keep: '3, 10-20',
    leaveOut: '50-52',
    together: '4, 7-8',
    before: '3 before 9\n1-2 before 9',
    first: '6, 5',
  })
  expect(readConstraintTexts(texts, 1000)).toEqual({ constraints: ALL, errors: {} })
  expect(readConstraintTexts(NO_TEXTS, 1000)).toEqual({ constraints: null, errors: {} })
})

test('lists are read with any of the usual separators; a chain makes pairs of neighbours', () => {
  const read = (changes: object) => readConstraintTexts({ ...NO_TEXTS, ...changes }, 100).constraints
  expect(read({ keep: ' 3;10 – 20\n7 ' })?.keep).toEqual([3, '10-20', 7])
  expect(read({ keep: '5-5' })?.keep).toEqual([5])
  expect(read({ before: '3, 4 before 7 before 9' })?.before).toEqual([
    [3, 7],
    [4, 7],
    [7, 9],
  ])
})

test('what can not be read is said at its field, and only there', () => {
  const { errors } = readConstraintTexts(
    { keep: '3, x', leaveOut: '20-10', together: '4', before: '3 after 7', first: '0' },
    100,
  )
  expect(errors).toEqual({
    keep: '“x” is no pattern number and no range such as 10-20.',
    leaveOut: 'The range 20-10 ends before it begins.',
    together: '“4” is one pattern alone: a group has two or more, such as 4, 9.',
    before: '“3 after 7” is no pair such as 3 before 7.',
    first: 'There is no pattern 0: they are numbered from 1 to 100.',
  })
  expect(readConstraintTexts({ ...NO_TEXTS, keep: '101' }, 100).errors.keep).toContain('no pattern 101')
})

test('each pattern says which rules hold for it', () => {
  const rules = [1, 3, 5, 7, 9, 12, 51, 60].map(ruleReader(ALL))
  expect(rules).toEqual([
    'before 9',
    'kept; before 9',
    'first, place 2',
    'with 4, 8',
    'after 3, 1–2',
    'kept',
    'left out',
    '',
  ])
})

test('a rule for one pattern takes it out of the lists that say otherwise, and can be taken away', () => {
  const kept = withRule(ALL, 'keep', 51)
  expect([kept.keep, kept.leaveOut]).toEqual([
    [3, '10-20', 51],
    [50, 52],
  ])
  expect(withRule(null, 'first', 4)).toMatchObject({ first: [4], keep: [] })
  expect(withoutRule(ALL, 15)?.keep).toEqual([3, '10-14', '16-20'])
  expect(withoutRule(ALL, 9)).toMatchObject({ before: [] })
  expect(withoutRule(ALL, 2)?.before).toEqual([
    [3, 9],
    [1, 9],
  ])
  expect(withoutRule({ ...ALL, together: [[4, 7]] }, 7)?.together).toEqual([])
  expect(withoutRule(withRule(null, 'keep', 1), 1)).toBeNull()
})

test('what is in force and what it costs is said in words', () => {
  expect(constraintsInWords(ALL, formats)).toBe(
    '12 kept, 3 left out, 1 group together, 3 pairs in order, 2 first',
  )
  const cost = (row: object) =>
    costInWords(ALL, { kind: 'keep', cost: 31, isInTheWay: false, ...row }, 'faults', formats)
  expect(cost({})).toBe('Keeping 12 patterns costs 31 faults.')
  expect(cost({ cost: 1 })).toBe('Keeping 12 patterns costs 1 fault.')
  expect(cost({ kind: 'before', cost: 0 })).toBe('Holding 3 pairs in order costs nothing.')
  expect(cost({ kind: 'first', isInTheWay: true })).toBe(
    'Running 2 patterns first leaves no choice that fits this cut.',
  )
})

test('a cut against the constraints names the nearest that keeps them', () => {
  const mayCut = Uint8Array.of(0, 0, 0, 1, 1, 0, 0, 1, 0)
  const trouble = (cut: number) => constraintTrouble(mayCut, cut, formats)
  expect(trouble(3)).toBe('')
  expect(trouble(1)).toContain('the cut at 3 patterns keeps')
  expect(trouble(5)).toContain('the cut at 4 patterns keeps')
  expect(trouble(8)).toContain('the cut at 7 patterns keeps')
  expect(constraintTrouble(new Uint8Array(3), 1, formats)).toContain('at every cut')
})

test('the smallest complete set says what is proven of it', () => {
  expect(smallestWords({ patterns: 52, lowerBound: 50, proven: false }, 1, formats)).toBe(
    'best found 52 patterns, at least 50 (not proven)',
  )
  expect(smallestWords({ patterns: 52, lowerBound: 52, proven: true }, 3, formats)).toBe(
    '52 patterns, proven the fewest, for one detection of each fault',
  )
})
