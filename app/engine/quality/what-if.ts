import { balancedChainLength } from '../tester/scan-cycles.ts'
import type { Assumptions } from './sensitivity.ts'

/** What `evaluate` makes of every pair of two inputs; `outcomes[row][column]`. */
export type WhatIfGrid<Outcome> = {
  readonly rows: readonly number[]
  readonly columns: readonly number[]
  readonly outcomes: readonly (readonly Outcome[])[]
}

/** Returns the grid of scan chains (rows) by shift rate in MHz (columns); chains are taken to be balanced. */
export function chainsByShiftRate<Outcome>(
  { tester, product }: Assumptions,
  flipFlops: number,
  chains: readonly number[],
  shiftMHz: readonly number[],
  evaluate: (assumptions: Assumptions) => Outcome,
): WhatIfGrid<Outcome> {
  return gridOf(chains, shiftMHz, (nChains, rate) =>
    evaluate({
      tester: { ...tester, shiftMHz: rate },
      product: { ...product, chains: nChains, longestChain: balancedChainLength(flipFlops, nChains) },
    }),
  )
}

/** Returns the grid of sites (rows) by multi-site efficiency (columns). */
export function sitesByEfficiency<Outcome>(
  { tester, product }: Assumptions,
  sites: readonly number[],
  efficiencies: readonly number[],
  evaluate: (assumptions: Assumptions) => Outcome,
): WhatIfGrid<Outcome> {
  return gridOf(sites, efficiencies, (nSites, multiSiteEfficiency) =>
    evaluate({ tester: { ...tester, sites: nSites, multiSiteEfficiency }, product }),
  )
}

/** Returns values around one that is known: half of it, itself, twice and four times, whole and each once. */
export function steppedAround(value: number): readonly number[] {
  return [...new Set([0.5, 1, 2, 4].map((factor) => Math.max(1, Math.round(value * factor))))]
}

function gridOf<Outcome>(
  rows: readonly number[],
  columns: readonly number[],
  at: (row: number, column: number) => Outcome,
): WhatIfGrid<Outcome> {
  return { rows, columns, outcomes: rows.map((row) => columns.map((column) => at(row, column))) }
}
