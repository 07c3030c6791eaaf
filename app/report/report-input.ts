import type { LostBlock } from '../engine/choose/lost-blocks.ts'
import type { PlanResult } from '../engine/choose/plan-result.ts'
import type { PricedOrder, Pricing } from '../engine/choose/price.ts'
import type { CoverageCurve } from '../engine/choose/order.ts'
import type { FaultBase } from '../engine/faults/fault-list.ts'
import type { FaultCounts } from '../engine/quality/test-coverage.ts'
import type { FaultState } from '../engine/simulate/detection-profile.ts'

/** Everything that a report says. Names from input files stand here as they are: each renderer escapes them. */
export type ReportInput = {
  /** Null: the report makes its own from the answer. */
  readonly title: string | null
  readonly author: string | null
  readonly company: string | null
  /** The day of the report, as 2026-12-01. */
  readonly date: string
  /** Tallycut's version. */
  readonly version: string
  /** How netlist and patterns are called, such as "netlist r5, pattern set B". */
  readonly subject: string
  readonly files: readonly InputFile[]
  readonly options: readonly { readonly label: string; readonly value: string }[]
  /** The command that gives the same figures. */
  readonly commandLine: string
  readonly circuit: {
    readonly name: string
    readonly inputs: number
    readonly outputs: number
    readonly flipFlops: number
    readonly gates: number
  }
  readonly faultBase: FaultBase
  readonly collapsedFaults: number
  /** Uncollapsed faults by their state under the whole pattern set, states without faults left out. */
  readonly states: readonly { readonly state: FaultState; readonly faults: number }[]
  readonly counts: FaultCounts
  readonly plan: PlanResult
  readonly curve: CoverageCurve
  readonly priced: PricedOrder
  readonly pricing: Pricing
  /** What the cut loses, by block; null where that was not worked out. */
  readonly lost: readonly LostBlock[] | null
  /** What readers and runs warned of. */
  readonly notices: readonly string[]
  readonly paper: 'A4' | 'Letter'
  readonly sections: Readonly<Record<ReportSection, boolean>>
}

export type InputFile = {
  readonly role: string
  readonly name: string
  /** Hexadecimal. */
  readonly sha256: string
  readonly sizeBytes: number
}

export type ReportSection = 'assumptions' | 'money' | 'lost' | 'reproduce' | 'patterns'

export const ALL_SECTIONS: Readonly<Record<ReportSection, boolean>> = {
  assumptions: true,
  money: true,
  lost: true,
  reproduce: true,
  patterns: true,
}
