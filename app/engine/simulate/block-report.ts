/**
 * Which patterns of one block detect which classes, in a compact form: bits for classes that few of its patterns detect,
 * counts alone for the others. Classes that none detects are left out; the order of classes is the kernel's own.
 */
export type BlockReport = {
  /** The number of the block's first pattern, from 0. */
  readonly firstPattern: number
  readonly wordsPerRow: number
  readonly hardClasses: Uint32Array
  /** Row-major, wordsPerRow words for each hard class: pattern firstPattern + p is bit `p & 31` of word `p >> 5`. */
  readonly hardWords: Uint32Array
  readonly easyClasses: Uint32Array
  /** How many of the block's patterns detect each easy class. */
  readonly easyCounts: Uint32Array
}

/** Adds the classes that have the same effect as a reported one: `[class, reported class]` in each pair. */
export function withTwins(report: BlockReport, twins: readonly (readonly [number, number])[]): BlockReport {
  const hardRow = new Map(Array.from(report.hardClasses, (group, row) => [group, row]))
  const easyRow = new Map(Array.from(report.easyClasses, (group, row) => [group, row]))
  const { wordsPerRow } = report
  const hard = twins.flatMap(([group, same]) => {
    const row = hardRow.get(same)
    return row === undefined
      ? []
      : [{ group, words: report.hardWords.subarray(row * wordsPerRow, (row + 1) * wordsPerRow) }]
  })
  const easy = twins.flatMap(([group, same]) => {
    const row = easyRow.get(same)
    return row === undefined ? [] : [{ group, count: report.easyCounts[row] }]
  })
  return {
    ...report,
    hardClasses: Uint32Array.from([...report.hardClasses, ...hard.map(({ group }) => group)]),
    hardWords: Uint32Array.from([...report.hardWords, ...hard.flatMap(({ words }) => [...words])]),
    easyClasses: Uint32Array.from([...report.easyClasses, ...easy.map(({ group }) => group)]),
    easyCounts: Uint32Array.from([...report.easyCounts, ...easy.map(({ count }) => count)]),
  }
}
