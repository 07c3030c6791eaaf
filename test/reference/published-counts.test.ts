import { describe, expect, it } from 'vitest'
import { buildFaultList } from '../../app/engine/faults/build-fault-list.ts'
import { readBench } from '../../app/engine/formats/bench/read-bench.ts'
import { hasData, readData } from '../helpers/data.ts'

// SOURCE: ISCAS-85, Brglez & Fujiwara 1985, and the literature after it; collapsed faults from memory of it.
// The circuits are named after their number of lines.
const ISCAS85 = {
  c17: 22,
  c432: 524,
  c499: 758,
  c880: 942,
  c1355: 1574,
  c1908: 1879,
  c2670: 2747,
  c5315: 5350,
  c6288: 7744,
}

// SOURCE: ISCAS-89 in the full-scan view, Brglez, Bryan & Kozminski 1989, and the literature after it; from memory.
const ISCAS89 = {
  s5378: 4603,
  's13207.1': 9815,
  s13207: 9815,
  's15850.1': 11725,
  s15850: 11725,
  s35932: 39094,
  's38584.1': 36303,
  s38584: 36303,
}

function faultsOf(path: string) {
  const netlist = readBench(readData(path)).value
  if (netlist === null) throw new Error(`${path} does not read`)
  return buildFaultList(netlist.circuit)
}

describe.skipIf(!hasData)('fault counts of the published circuits', () => {
  it.each(Object.entries(ISCAS85))(
    '%s has %i collapsed faults and as many lines as its name says',
    (name, collapsed) => {
      const faults = faultsOf(`circuits/iscas85/${name}.bench`)
      const lines = Number(name.slice(1))
      expect({ collapsed: faults.nClasses, total: faults.nFaults }).toEqual({
        collapsed,
        total: 2 * lines,
      })
    },
  )

  it.each(Object.entries(ISCAS89))('%s has %i collapsed faults', (name, collapsed) => {
    expect(faultsOf(`circuits/iscas89/${name}.bench`).nClasses).toBe(collapsed)
  })
})
