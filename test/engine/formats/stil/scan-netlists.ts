import type { Netlist } from '../../../../app/engine/circuit/netlist.ts'
import { readLiberty } from '../../../../app/engine/formats/liberty/read-liberty.ts'
import { proposeTestPins } from '../../../../app/engine/formats/stil/read-stil.ts'
import { readVerilog } from '../../../../app/engine/formats/verilog/read-verilog.ts'
import type { Source } from '../../../../app/engine/source/source.ts'
import { readData } from '../../../helpers/data.ts'

/** One of the mapped scan netlists of the open data, with the test pins that its patterns propose. */
export function readScanNetlist(name: string, patterns: Source): Netlist {
  const netlist = readData(`mapped/${name}.v`)
  const library = readLiberty(readData('mapped/scan_gates.lib')).value
  if (library === null) throw new Error('the library was not read')
  const ports = new Set(netlist.text.match(/\w+/g))
  const testPins = proposeTestPins(patterns, ports)
  const { value, diagnostics } = readVerilog([netlist], { libraries: [library], testPins })
  if (value === null) throw new Error(diagnostics.map(({ message }) => message).join('\n'))
  return value
}
