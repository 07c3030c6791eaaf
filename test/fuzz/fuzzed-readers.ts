import { readBench } from '../../app/engine/formats/bench/read-bench.ts'
import { readConstraints } from '../../app/engine/formats/constraints/read-constraints.ts'
import { readPatternCsv } from '../../app/engine/formats/csv/read-pattern-csv.ts'
import { readLiberty } from '../../app/engine/formats/liberty/read-liberty.ts'
import { readProgram } from '../../app/engine/formats/program/read-program.ts'
import { proposeTestPins, readStil, surveyStil } from '../../app/engine/formats/stil/read-stil.ts'
import { readVectors } from '../../app/engine/formats/vectors/read-vectors.ts'
import { readVerilog } from '../../app/engine/formats/verilog/read-verilog.ts'
import { readWeights } from '../../app/engine/formats/weights/read-weights.ts'
import { readProduct } from '../../app/engine/quality/product.ts'
import type { Reading } from '../../app/engine/source/diagnostic.ts'
import type { Source } from '../../app/engine/source/source.ts'
import { readTester } from '../../app/engine/tester/tester.ts'
import { smallScanDesign, smallStil } from '../engine/formats/stil/small-scan-design.ts'
import { hasData, readData } from '../helpers/data.ts'

export type FuzzedReader = {
  readonly name: string
  /** Well-formed texts that are mutated. */
  readonly seeds: readonly string[]
  /** All readings that the reader makes of one text. */
  readonly read: (source: Source) => readonly Reading<unknown>[]
}

/** A file of the open data, or its first characters; nothing where the data are not there. */
function data(path: string, length = 6000): string[] {
  if (!hasData) return []
  const { text } = readData(path)
  return [text.length <= length ? text : text.slice(0, length)]
}

const BENCH =
  'INPUT(a)\nINPUT(b)\nOUTPUT(y)\nOUTPUT(q)\nq = DFF(n)\nn = NAND(a, b)\ny = XOR(a, q)\nc = CONST1\n'

const VERILOG = `\`timescale 1ns/1ps
module half #(parameter W = 1) (input a, input b, output s, c); xor (s, a, b); and g1 (c, a, b); endmodule
(* keep *) module top (clk, d, y, z); input clk; input [3:0] d; output y; output [1:0] z; wire [3:0] w; reg q;
  half h0 (.a(d[0]), .b(d[1]), .s(w[0]), .c()); half #(2) h1 (d[2], d[3], w[1], w[2]);
  assign {w[3], z} = {d[0] & ~d[1] | 1'b0, d[3] ? w[2:1] : 2'b10}; assign y = q ^ \\w[3] ; wire \\w[3] = w[3];
  always @(posedge clk) q <= w[0]; supply0 gnd; tri t; bufif1 (t, d[0], w[1]);
endmodule
`

const LIBERTY = `library (small) { time_unit : "1ns"; type (bus2) { base_type : array; bit_width : 2; bit_from : 1; bit_to : 0; }
  cell (INV) { area : 1; pin (A) { direction : input; } pin (Y) { direction : output; function : "!A"; } }
  cell (MUX) { pin(A, B, S) { direction : input; } pin (Y) { direction : output; function : "(A S') + (B S)"; three_state : "S"; } }
  cell (FF) { ff (IQ, IQN) { clocked_on : "CK"; next_state : "(SE SI) + (SE' D)"; clear : "RN'"; }
    pin (CK) { direction : input; clock : true; } pin (D) { direction : input; } pin (RN) { direction : input; }
    pin (SI) { direction : input; nextstate_type : scan_in; } pin (SE) { direction : input; nextstate_type : scan_enable; }
    pin (Q) { direction : output; function : "IQ"; } test_cell () { pin (SI) { signal_type : test_scan_in; } } }
  cell (LAT) { latch (L, LN) { enable : "G"; data_in : "D"; } bus (D) { bus_type : bus2; direction : input; } pin (G) { direction : input; } }
}
`

const VECTORS = '# two inputs, three flip-flops\n10001 LHHHL @4\nX1110 LLXLH\n00000\n'
const PATTERN_CSV = 'A,B,F1,F2,F3,expect Y,cycles\n1,0,0,0,1,L,4\nX,1,1,1,0,,\n'
const PROGRAM =
  'burst,kind,file,patterns,measured ms,set-up ms,must stay,must be first\ncontacts,pins,,,2.5,1,yes,yes\ncore,scan,a.stil,12,40,,no,\n'
const WEIGHTS = 'fault or block,weight\nG1/0,2\nalu/u3,0.5\n'
const CONSTRAINTS = '{ "keep": [1, "3-5"], "leaveOut": [9], "together": [[2, 4]], "before": [[1, 7]] }'
const TESTER =
  '{ "name": "bench", "shiftMHz": 50, "captureMHz": 100, "vectorMemory": 1e6, "reloadMs": null, "sites": 4, "multiSiteEfficiency": 0.95, "indexMs": 200, "costPerHour": 60, "utilisation": 0.8 }'
const PRODUCT =
  '{ "name": "part", "yield": 0.8, "model": "williams-brown", "chains": 4, "longestChain": 100, "captureCycles": 1, "shippedPerYear": 1e6 }'

const STIL_EXTRAS = `Spec { Category typical { tp = '100ns'; edge { Min '1ns'; Typ '2ns'; } } } UserKeywords Odd; Odd thing { a b; }
MacroDefs { cap { W t; V { CK=P; SE=0; pi=##; po=\\r2 #; } } }`
const STIL = smallStil(
  `Ann {* first *} "start": C { CK=0; SE=0; SI=0; pi=\\r2 0; po=XX; }
  Call load { SI=100; } Call capture { pi=10; po=LH; } Loop 3 { V { pi=\\h 1; } } MatchLoop 5 { V { CK=0; } }
  Call load { SI=01N; SO=LXH; } Macro cap { pi=\\d 3; po=HX; } BreakPoint; Call load { SO=HLX; } Stop;`,
  { before: STIL_EXTRAS },
)

const design = smallScanDesign()
const unchained = smallScanDesign({ hasChain: false })

export const FUZZED_READERS: readonly FuzzedReader[] = [
  {
    name: 'bench',
    seeds: [BENCH, ...data('circuits/iscas89/s27.bench'), ...data('circuits/itc99/b02.bench')],
    read: (source) => [readBench(source)],
  },
  {
    name: 'verilog',
    seeds: [
      VERILOG,
      ...data('circuits/iscas89/s27.v'),
      ...data('mapped/toy_counter.v'),
      ...data('circuits/epfl/ctrl.v'),
    ],
    read: (source) => [readVerilog([source])],
  },
  {
    name: 'verilog with cells',
    seeds: [...data('mapped/toy_counter.v'), ...data('mapped/s27_scan.v'), VERILOG],
    read: (source) => [readVerilog([source], { libraries })],
  },
  {
    name: 'liberty',
    seeds: [LIBERTY, ...data('mapped/toy_cells.lib'), ...data('mapped/scan_gates.lib')],
    read: (source) => [readLiberty(source)],
  },
  {
    name: 'stil',
    seeds: [STIL, ...data('stil/s27_scan.stil'), ...data('stil/bus_transceiver_fixed.stil')],
    read: (source) => {
      proposeTestPins(source, ['CK', 'SE', 'SI'])
      return [readStil(source, design), readStil(source, unchained), surveyStil(source)]
    },
  },
  { name: 'vectors', seeds: [VECTORS], read: (source) => [readVectors(source, design.circuit)] },
  { name: 'pattern csv', seeds: [PATTERN_CSV], read: (source) => [readPatternCsv(source, design.circuit)] },
  { name: 'program list', seeds: [PROGRAM], read: (source) => [readProgram(source)] },
  { name: 'weights', seeds: [WEIGHTS], read: (source) => [readWeights(source)] },
  { name: 'constraints', seeds: [CONSTRAINTS], read: (source) => [readConstraints(source, 12)] },
  { name: 'tester', seeds: [TESTER], read: (source) => [readTester(source)] },
  { name: 'product', seeds: [PRODUCT], read: (source) => [readProduct(source)] },
]

const libraries = [LIBERTY, ...data('mapped/toy_cells.lib'), ...data('mapped/scan_gates.lib')].flatMap(
  (text) => {
    const { value } = readLiberty({ name: 'cells.lib', text })
    return value === null ? [] : [value]
  },
)
