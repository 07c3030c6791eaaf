import { expect, test } from 'vitest'
import { numberFormats } from '../../../app/contract/format-number.ts'
import { figuresAt } from '../../../renderer/components/budget/cut-figures.ts'
import {
  brokenLimits,
  fewestForGoal,
  limitsOf,
  mostInside,
} from '../../../renderer/components/budget/cut-limits.ts'
import { cutAfterKey, snapped, typedCut } from '../../../renderer/components/budget/cut-moves.ts'
import {
  brokenWords,
  ceilingWords,
  coverageAxisTitle,
  cutSentence,
  keptWords,
} from '../../../renderer/components/budget/cut-words.ts'
import { figureRows } from '../../../renderer/components/budget/figure-rows.ts'
import { firstCut } from '../../../renderer/components/budget/first-cut.ts'
import { budgetView } from '../../helpers/budget-columns.ts'

const formats = numberFormats('en')
const view = budgetView(1000)
const steepest = view.orders[1]!
const at = (cut: number) => figuresAt(view, steepest, cut, 1)
const text = (cut: number) =>
  cutSentence(at(cut), at(Math.min(1000, cut + 10)), view, formats, 1)
    .map((phrase) => phrase.text)
    .join('')
    .replaceAll('\u00a0', ' ')

test('limits are inclusive: the last cut that takes exactly the limit keeps it', () => {
  const limits = limitsOf(view, steepest, 1)
  expect(limits.time).toBe(500)
  expect(steepest.milliseconds[500]).toBe(view.limits.maxMilliseconds)
  expect(steepest.vectorMemory[limits.memory!]).toBeLessThanOrEqual(view.vectorMemory!)
  expect(steepest.vectorMemory[limits.memory! + 1]).toBeGreaterThan(view.vectorMemory!)
  expect(steepest.detected[limits.goal!]).toBeGreaterThanOrEqual(0.98 * 40_000)
  expect(steepest.detected[limits.goal! - 1]).toBeLessThan(0.98 * 40_000)
  expect(steepest.dppm[limits.escapes!]).toBeLessThanOrEqual(1250)
  expect(steepest.dppm[limits.escapes! - 1]).toBeGreaterThan(1250)
  expect(mostInside(limits, 1000)).toBe(500)
  expect(fewestForGoal(limits)).toBe(Math.max(limits.goal!, limits.escapes!))
})

test('a goal that is out of reach has no cut', () => {
  const unmet = limitsOf({ ...view, limits: { ...view.limits, minCoverage: 0.9999 } }, steepest, 1)
  expect(unmet.goal).toBe(Infinity)
  expect(fewestForGoal(unmet)).toBeNull()
})

test('a first cut lies inside all limits', () => {
  const cut = firstCut(view, steepest)
  expect(brokenLimits(view, at(cut))).toEqual({ timeOver: 0, memoryOver: 0, coverageShort: 0, dppmOver: 0 })
})

// 330: 0.991 × (1 − e^(−330 / 83.33)) of 40,000 are 38,884 faults; 1 − 0.94^(1 − 0.97210) is 1,725 in a million; by hand.
test('the sentence says what a cut takes, detects and lets escape, and what ten more would buy', () => {
  expect(text(330)).toMatch(
    /^330 of 1,000 patterns in 3\.74 ms: 97\.21 % of 40,000 faults, an estimated 1,725 DPPM\. The next 10 patterns would buy 0\.215 % for 0\.11 ms\.$/,
  )
  expect(text(1000)).toContain('No pattern is left to add.')
})

test('a broken limit says by how much', () => {
  expect(brokenWords(brokenLimits(view, at(640)), formats).replaceAll('\u00a0', ' ')).toBe(
    'Over the time limit by 1.54 ms; past the vector memory by 22,220 cycles.',
  )
  expect(brokenWords(brokenLimits(view, at(100)), formats)).toMatch(
    /^Below the goal by .* over the escape rate asked by /,
  )
  expect(keptWords({ time: true, memory: true, goal: true })).toBe('Fits time and memory, meets the goal.')
})

test('what is proven is put in faults', () => {
  const figures = at(330)
  expect(ceilingWords(figures, figures.detected, view, 1, formats)).toContain('no better choice exists')
  expect(ceilingWords(figures, figures.detected + 0.1, view, 1, formats)).toContain(
    'within less than 0.001 % of the best',
  )
})

test('keys step, page and go to goal, limit and neighbouring marks', () => {
  const moves = { cut: 100, patterns: 1000, fewest: 237, most: 402, stops: [50, 100, 330] }
  const after = (key: string, shiftKey = false) => cutAfterKey({ key, shiftKey }, moves)
  expect(['ArrowLeft', 'ArrowRight', 'ArrowDown', 'ArrowUp'].map((key) => after(key))).toEqual([
    99, 101, 99, 101,
  ])
  expect([after('ArrowLeft', true), after('PageUp'), after('PageDown')]).toEqual([90, 150, 50])
  expect([after('Home'), after('End'), after('['), after(']'), after('x')]).toEqual([237, 402, 50, 330, null])
  expect(cutAfterKey({ key: 'PageDown', shiftKey: false }, { ...moves, cut: 3 })).toBe(0)
})

test('a cut snaps to the nearest stop within reach', () => {
  const half = (cut: number): number => cut / 2
  expect(snapped(339, [330, 350], half, 6)).toBe(330)
  expect(snapped(343, [330, 350], half, 6)).toBe(350)
  expect(snapped(310, [330], half, 6)).toBe(310)
})

test('a typed cut may hold separators and nothing else', () => {
  expect(['1,000', '42', '1001', 'many', '', '-3', '4.5e1'].map((typed) => typedCut(typed, 1000))).toEqual([
    1000,
    42,
    null,
    null,
    null,
    null,
    null,
  ])
})

// 640: 0.991 × (1 − e^(−640 / 83.33)) is 0.99054, so 585 in a million; by hand.
test('figures with a limit say what is left of it or by how much it is passed', () => {
  const words = (cut: number) =>
    figureRows(view, at(cut), 1, formats).flatMap(({ meter }) => (meter ? [meter.left] : []))
  expect(words(330)).toEqual(['1.87 left', '', '475 over'])
  expect(words(640)).toEqual(['1.54 over', 'reload forbidden', '665 below'])
})

test('with weights, sentence and axis say what counts by weight and what plainly', () => {
  const weighted = { ...view, isWeighted: true, total: 90_000 }
  const figures = { ...at(400), coverage: 0.9883, plainCoverage: 0.9728 }
  const sentence = cutSentence(figures, figures, weighted, formats, 1)
    .map((phrase) => phrase.text)
    .join('')
    .replaceAll('\u00a0', ' ')
  expect(sentence).toContain('98.83 % by weight, 97.28 % of 40,000 faults, an estimated')
  expect(coverageAxisTitle(weighted, 3, formats)).toBe(
    'Weighted coverage detected 3 times, % of the weight of 40,000 faults',
  )
  expect(coverageAxisTitle(view, 1, formats)).toBe('Fault coverage, % of 40,000 faults')
  expect(ceilingWords(figures, 50_000, weighted, 3, formats)).toContain(
    'more than 50,000 of the weight of faults 3 times or more',
  )
})
