import { expect, test } from 'vitest'
import { numberFormats } from '../../../app/contract/format-number.ts'
import { improvementWords } from '../../../renderer/components/budget/improvement-words.ts'

const formats = numberFormats('en')
const found = {
  order: [1, 2, 3],
  cut: 37,
  detected: 4548,
  before: 4500,
  steepest: 4536,
  bound: 4560,
  proven: false,
  seconds: 3.21,
}
const words = (changes: object, subject: object = {}, n = 1) =>
  improvementWords(
    { ...found, ...changes },
    { order: 'steepest', cut: 37, within: 'patterns', ...subject },
    { isWeighted: false },
    n,
    formats,
  ).map((sentence) => sentence.replaceAll('\u00a0', ' '))

test('what was gained over the greedy choice and what is left to find is said in words', () => {
  expect(words({})).toEqual([
    '37 patterns detect 4,548 faults: 12 more than choosing the steepest first.',
    'No choice of 37 patterns detects more than 4,560: a gap of 12 is left after 3.2 s.',
  ])
})

test('what is proven, what gained nothing and another order say so', () => {
  const [gain, proof] = words(
    { detected: 4536, bound: 4536, proven: true },
    { order: 'as-delivered', within: 'cycles' },
    3,
  )
  expect(gain).toBe(
    '37 patterns detect 4,536 faults 3 times or more: no more than choosing the steepest first, and 36 more than the order shown, as delivered.',
  )
  expect(proof).toBe('Proven in 3.2 s: no choice of 37 patterns and no more tester cycles detects more.')
})
