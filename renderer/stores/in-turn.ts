/** Returns what does pieces of work one after another, so that a later change never arrives before an earlier one. */
export function inTurn(): <T>(work: () => Promise<T>) => Promise<T> {
  let last: Promise<unknown> = Promise.resolve()
  return (work) => {
    const next = last.then(work, work)
    last = next.catch(() => undefined)
    return next
  }
}
