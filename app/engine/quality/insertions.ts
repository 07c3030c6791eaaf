import { perDeviceMs } from '../tester/multi-site.ts'
import type { Tester } from '../tester/tester.ts'
import { costOfTime, testedDevices } from '../tester/tester-hours.ts'
import { passFraction, yieldAfter } from './yield.ts'

/** One step of test, such as wafer sort or final test: its tester, what comes in, what it runs. */
export type Insertion = {
  readonly name: string
  readonly tester: Tester
  /** The yield of what comes in. Null: what the step before lets through; the first takes `firstYield`. */
  readonly yieldIn: number | null
  /** Test coverage of what it runs, 0..1. */
  readonly coverage: number
  /** Its whole program on one site. */
  readonly programMs: number
}

export type PricedInsertion = {
  readonly name: string
  readonly yieldIn: number
  readonly passFraction: number
  readonly perDeviceMilliseconds: number
  /** Tests here for each device shipped, retests included. */
  readonly testedPerShipped: number
  readonly costPerShipped: number
}

/**
 * Returns what each insertion tests and costs for each device that passes the last: one that fails goes no further, so
 * the earlier an insertion, the more it tests.
 * What one insertion has let through comes to the next with the yield Y^(1−T); where assembly adds defects, or the next
 * covers what the first does not, its own yield in has to be given.
 * SOURCE: Williams & Brown 1981 for pass fractions and what is let through; the chain of insertions is common practice.
 */
export function priceInsertions(
  insertions: readonly Insertion[],
  firstYield: number,
  retestRate: number,
): readonly PricedInsertion[] {
  const yields: number[] = []
  insertions.forEach(({ yieldIn }, at) => {
    yields.push(yieldIn ?? (at === 0 ? firstYield : yieldAfter(yields[at - 1], insertions[at - 1].coverage)))
  })
  const priced: PricedInsertion[] = []
  let needed = 1
  for (let at = insertions.length - 1; at >= 0; at--) {
    const { name, tester, coverage, programMs } = insertions[at]
    const { sites, multiSiteEfficiency, indexMs, costPerHour } = tester
    const perDeviceMilliseconds = perDeviceMs(programMs, sites, multiSiteEfficiency, indexMs)
    const pass = passFraction(yields[at], coverage)
    const testedPerShipped = testedDevices(needed, pass, retestRate)
    priced.unshift({
      name,
      yieldIn: yields[at],
      passFraction: pass,
      perDeviceMilliseconds,
      testedPerShipped,
      costPerShipped: testedPerShipped * costOfTime(perDeviceMilliseconds, costPerHour),
    })
    needed /= pass
  }
  return priced
}
