/**
 * Returns the candidate that is the fewest edits away from a misspelled name, or null where none is close enough to
 * be what was meant: at most a third of the name's length, and never more than three edits. Case alone counts as no
 * edit. Ties go to the first candidate.
 * SOURCE: Damerau 1964, two swapped neighbours being one edit; the threshold is our own.
 */
export function closestName(name: string, candidates: Iterable<string>): string | null {
  const wanted = name.toLowerCase()
  let best: string | null = null
  let fewest = Math.min(3, Math.floor(wanted.length / 3)) + 1
  for (const candidate of candidates) {
    const distance = editDistance(wanted, candidate.toLowerCase(), fewest)
    if (distance < fewest) {
      fewest = distance
      best = candidate
    }
  }
  return best
}

/** Returns the number of insertions, deletions, replacements and swaps of neighbours from a to b, or `limit` where it is more. */
function editDistance(a: string, b: string, limit: number): number {
  if (Math.abs(a.length - b.length) >= limit) return limit
  let before: number[] = []
  let row = Array.from({ length: b.length + 1 }, (_, at) => at)
  for (let i = 1; i <= a.length; i++) {
    const next = [i]
    let smallest = i
    for (let j = 1; j <= b.length; j++) {
      const replaced = row[j - 1] + (a[i - 1] === b[j - 1] ? 0 : 1)
      next[j] = Math.min(replaced, row[j] + 1, next[j - 1] + 1)
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1]) {
        next[j] = Math.min(next[j], before[j - 2] + 1)
      }
      smallest = Math.min(smallest, next[j])
    }
    if (smallest > limit) return limit
    before = row
    row = next
  }
  return Math.min(limit, row[b.length])
}
