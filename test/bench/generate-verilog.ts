import { createRandom } from '../../app/engine/source/random.ts'

/** A made netlist and what a reader must find in it. */
export type GeneratedVerilog = {
  readonly text: string
  readonly library: string
  readonly instances: number
  readonly flipFlops: number
}

const CELLS = [
  { name: 'ND2', pins: ['A', 'B'] },
  { name: 'NR2', pins: ['A', 'B'] },
  { name: 'AOI21', pins: ['A', 'B', 'C'] },
  { name: 'XR2', pins: ['A', 'B'] },
  { name: 'IV', pins: ['A'] },
] as const

const LIBRARY = `library (generated) {
  cell (ND2) { pin (A, B) { direction : input; } pin (Y) { direction : output; function : "!(A B)"; } }
  cell (NR2) { pin (A, B) { direction : input; } pin (Y) { direction : output; function : "!(A + B)"; } }
  cell (AOI21) { pin (A, B, C) { direction : input; } pin (Y) { direction : output; function : "!(A B + C)"; } }
  cell (XR2) { pin (A, B) { direction : input; } pin (Y) { direction : output; function : "A ^ B"; } }
  cell (IV) { pin (A) { direction : input; } pin (Y) { direction : output; function : "!A"; } }
  cell (SDF) {
    ff (IQ, IQN) { clocked_on : "CK"; next_state : "(SE SI) + (!SE D)"; }
    pin (CK, D) { direction : input; }
    pin (SI) { direction : input; nextstate_type : scan_in; }
    pin (SE) { direction : input; nextstate_type : scan_enable; }
    pin (Q) { direction : output; function : "IQ"; }
  }
}
`

/**
 * Returns a mapped netlist of about that many bytes, as place-and-route tools write them: named connections, one wire
 * declaration a net, every fifteenth instance a scan flip-flop, all in one chain. Same seed, same text.
 */
export function generateVerilog(bytes: number, seed: number): GeneratedVerilog {
  const random = createRandom(seed)
  const inputs = 64
  const declarations: string[] = []
  const body: string[] = []
  const nets = Array.from({ length: inputs }, (_, bit) => `in[${bit}]`)
  let size = 0
  let instances = 0
  let flipFlops = 0
  let scan = 'si'
  // A window of recent nets keeps the logic shallow enough to be like a real design, and without loops.
  const pick = (): string => nets[nets.length - 1 - random.below(Math.min(nets.length, 4096))]
  while (size < bytes) {
    const net = `core_block_n${instances}`
    let line: string
    if (instances % 15 === 14) {
      line = `  SDF reg_${instances}_ (.D(${pick()}),\n    .SI(${scan}),\n    .SE(se),\n    .CK(ck),\n    .Q(${net}));`
      scan = net
      flipFlops++
    } else {
      const { name, pins } = CELLS[random.below(CELLS.length)]
      const connections = pins.map((pin) => `.${pin}(${pick()})`).join(',\n    ')
      line = `  ${name} g${instances} (${connections},\n    .Y(${net}));`
    }
    body.push(line)
    declarations.push(`  wire ${net};`)
    size += line.length + net.length + 10
    nets.push(net)
    instances++
  }
  const outputs = Array.from(
    { length: 32 },
    (_, bit) => `  assign out[${bit}] = ${nets[nets.length - 1 - bit]};`,
  )
  const text = [
    'module generated (ck, se, si, so, in, out);',
    '  input ck, se, si;',
    `  input [${inputs - 1}:0] in;`,
    '  output so;',
    '  output [31:0] out;',
    ...declarations,
    ...body,
    `  assign so = ${scan};`,
    ...outputs,
    'endmodule',
    '',
  ].join('\n')
  return { text, library: LIBRARY, instances, flipFlops }
}
