import type { PlanInput } from '../../app/engine/choose/build-plan.ts'
import { lostBlocks } from '../../app/engine/choose/lost-blocks.ts'
import { ALL_SECTIONS, type ReportInput } from '../../app/report/report-input.ts'
import { nandChoice, planOfNand } from './nand-plan.ts'

/** Returns what a report of a NAND gate's plan is made from, with whatever is changed. */
export function reportOfNand(
  changes: Partial<ReportInput> = {},
  planChanges: Partial<PlanInput> = {},
): ReportInput {
  const { result, curve, priced, pricing, counts } = planOfNand(planChanges)
  const { task, faults } = nandChoice()
  return {
    title: null,
    author: null,
    company: null,
    date: '2026-12-01',
    version: '1.2.3',
    subject: 'netlist r1, pattern set A',
    files: [{ role: 'Netlist', name: 'nand.bench', sha256: '0123456789abcdef'.repeat(4), sizeBytes: 48 }],
    options: [{ label: 'Order', value: 'steepest first' }],
    commandLine: 'tallycut plan nand.bench nand.vec',
    circuit: { name: 'nand', inputs: 2, outputs: 1, flipFlops: 0, gates: 1 },
    faultBase: 'lines',
    collapsedFaults: 4,
    states: [{ state: 'detected', faults: 6 }],
    counts,
    plan: result,
    curve,
    priced,
    pricing,
    lost: lostBlocks(
      task,
      faults,
      result.budget.chosen.map((pattern) => pattern - 1),
    ),
    notices: [],
    paper: 'A4',
    sections: ALL_SECTIONS,
    ...changes,
  }
}
