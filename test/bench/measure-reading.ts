// Reads generated text of one format and prints a row as JSON: node test/bench/measure-reading.ts stil|verilog [MEGABYTES]
import { readLiberty } from '../../app/engine/formats/liberty/read-liberty.ts'
import { readStil } from '../../app/engine/formats/stil/read-stil.ts'
import { readVerilog } from '../../app/engine/formats/verilog/read-verilog.ts'
import type { Reading } from '../../app/engine/source/diagnostic.ts'
import { generateScanNetlist, generateStil } from './generate-stil.ts'
import { generateVerilog } from './generate-verilog.ts'

const DESIGN = { inputs: 200, outputs: 200, chains: 16, chainLength: 1000 }
const SEED = 2026

const [format = 'stil', megabytes = '100'] = process.argv.slice(2)
const bytes = Number(megabytes) * 1e6
const { text, read } = format === 'verilog' ? verilog() : stil()
const started = performance.now()
const { value, diagnostics } = read()
const seconds = (performance.now() - started) / 1000
if (value === null) throw new Error(diagnostics[0]?.message)
const peakMegabytes = process.resourceUsage().maxRSS / 1000
console.log(JSON.stringify({ format, megabytes: text.length / 1e6, seconds, peakMegabytes }))

/** One flat string of Latin-1, as a file gives it. */
function flat(parts: Iterable<string>): string {
  return Buffer.concat(Array.from(parts, (part) => Buffer.from(part, 'latin1'))).toString('latin1')
}

function stil(): { text: string; read: () => Reading<unknown> } {
  const text = flat(generateStil(DESIGN, bytes, SEED))
  const netlist = generateScanNetlist(DESIGN)
  return { text, read: () => readStil({ name: 'generated.stil', text }, netlist) }
}

function verilog(): { text: string; read: () => Reading<unknown> } {
  const generated = generateVerilog(bytes, SEED)
  const text = flat([generated.text])
  const library = readLiberty({ name: 'generated.lib', text: generated.library }).value
  if (library === null) throw new Error('the generated library was not read')
  return { text, read: () => readVerilog([{ name: 'generated.v', text }], { libraries: [library] }) }
}
