import { beforeAll, describe, expect, test } from 'vitest'
import type { Netlist } from '../../../app/engine/circuit/netlist.ts'
import { buildFaultList } from '../../../app/engine/faults/build-fault-list.ts'
import { readLiberty } from '../../../app/engine/formats/liberty/read-liberty.ts'
import { readVerilog } from '../../../app/engine/formats/verilog/read-verilog.ts'
import type { DetectionProfile } from '../../../app/engine/simulate/detection-profile.ts'
import type { SimulationTask } from '../../../app/engine/simulate/simulation.ts'
import { simulateTwin } from '../../../app/engine/simulate/twin.ts'
import { type UnusableCosts, unusableCosts } from '../../../app/engine/simulate/unusable-cost.ts'
import { simulateInProcess } from '../../../app/workers/simulate-in-process.ts'
import { hasData, readData } from '../../helpers/data.ts'
import { freshKernel } from '../../helpers/kernel.ts'

const LIBRARY = `library (own) {
  cell (AND2) { pin(A) { direction: input; } pin(B) { direction: input; } pin(Y) { direction: output; function: "A*B"; } }
  cell (DFF) { ff (IQ, IQN) { clocked_on: C; next_state: D; }
    pin(C) { direction: input; clock: true; } pin(D) { direction: input; } pin(Q) { direction: output; function: IQ; } } }`

function read(text: string, library = LIBRARY): Netlist {
  const cells = readLiberty({ name: 'own.lib', text: library }).value
  const { value } = readVerilog([{ name: 'own.v', text }], { libraries: cells === null ? [] : [cells] })
  if (value === null) throw new Error('not read')
  return value
}

function byTwin(task: SimulationTask): DetectionProfile {
  const result = simulateTwin(task)
  if (result === null) throw new Error('nobody stopped it')
  return result.profile
}

function costs(netlist: Netlist, simulate = byTwin): UnusableCosts | null {
  const estimate = unusableCosts(netlist, buildFaultList(netlist.circuit))
  let step = estimate.next()
  while (step.done !== true) step = estimate.next(simulate(step.value))
  return step.value
}

describe('what sources of X cost', () => {
  test('an unscanned flip-flop in front of an AND: counted by hand', () => {
    // y = a & q. With q = X only Y/1 is certain (a = 0): 1 of 12 faults. With q free and its data observed, all six of the
    // AND, Q's two and D's two are; the clock's two are not: 10 of 12.
    const found = costs(
      read(
        'module m(input a, b, ck, output y); DFF f (.C(ck), .D(b), .Q(q)); AND2 g (.A(a), .B(q), .Y(y)); endmodule',
      ),
    )
    expect(found).toMatchObject({ faults: 12, kinds: [{ kind: 'unscanned flip-flop' }] })
    expect(found?.coverage).toBeCloseTo(1 / 12)
    expect(found?.together).toBeCloseTo(9 / 12)
    expect(found?.kinds[0]?.coverage).toBe(found?.together)
  })

  test('two kinds: each alone, and both together where either alone is of no use', () => {
    // y = x1 & q, x1 from a black box, q from an unscanned flip-flop: the AND is tested only where both are known.
    const found = costs(
      read(`module m(input b, ck, output y); BOX u (.I(b), .O(x1));
        DFF f (.C(ck), .D(b), .Q(q)); AND2 g (.A(x1), .B(q), .Y(y)); endmodule`),
    )
    const [one, other] = found?.kinds.map(({ coverage }) => coverage) ?? []
    expect(found?.kinds.map(({ kind }) => kind).sort()).toEqual(['black box', 'unscanned flip-flop'])
    expect(found?.together).toBeGreaterThan((one ?? 1) + (other ?? 1))
  })

  test('a netlist without a source of X has no cost to tell', () => {
    expect(costs(read('module m(input a, b, output y); AND2 g (.A(a), .B(b), .Y(y)); endmodule'))).toBeNull()
  })
})

describe.skipIf(!hasData)('on netlists of the open data', () => {
  let kernel: Uint8Array
  beforeAll(async () => {
    kernel = await freshKernel()
  })

  test.each([
    ['sg13g2_MichaelBell_tinyQV.v', 'sg13g2_stdcell_typ_1p20V_25C.lib'],
    ['gf180_urish_simon.v', 'gf180mcu_7t_tt_025C_3v30.functional.lib'],
  ])(
    '%s: freed, it is as good as the same netlist read as scanned, and then freed of the rest',
    (verilog, liberty) => {
      const library = readLiberty(readData(`mapped/${liberty}`)).value
      if (library === null) throw new Error('not read')
      const [asItIs, asScanned] = [false, true].map((assumeScanned) => {
        const { value } = readVerilog([readData(`mapped/${verilog}`)], {
          libraries: [library],
          assumeScanned,
        })
        if (value === null) throw new Error('not read')
        return costs(value, (task) => simulateInProcess(kernel, task).profile)
      })
      if (!asItIs || !asScanned) throw new Error('both have sources of X')
      expect([...asItIs.kinds, ...asScanned.kinds].every(({ coverage }) => coverage >= 0)).toBe(true)
      // Other random values, and resets that act in the second reading alone: a few per cent.
      const usable = ({ coverage, together }: UnusableCosts): number => coverage + together
      expect(Math.abs(usable(asItIs) - usable(asScanned))).toBeLessThan(0.05)
    },
  )
})
