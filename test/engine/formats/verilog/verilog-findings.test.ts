import { describe, expect, test } from 'vitest'
import { readLiberty } from '../../../../app/engine/formats/liberty/read-liberty.ts'
import { readVerilog } from '../../../../app/engine/formats/verilog/read-verilog.ts'

const LIBRARY = readLiberty({
  name: 'own.lib',
  text: `library (own) { cell (NAND2) { pg_pin (VDD) { } pin (A) { direction : input; } pin (B) { direction : input; }
    pin (Y) { direction : output; function : "!(A B)"; } } }`,
}).value

/** The first finding of a text in which 「」 mark the place that it must name. */
function firstFinding(marked: string) {
  const text = marked.replace(/[「」]/g, '')
  const { value, diagnostics } = readVerilog([{ name: 'own.v', text }], {
    libraries: LIBRARY ? [LIBRARY] : [],
  })
  const [finding] = diagnostics
  const place = marked.includes('「')
    ? { start: marked.indexOf('「'), end: marked.indexOf('」') - 1 }
    : finding?.span
  return { value, finding, place, all: diagnostics }
}

const IN_MODULE = (statement: string): string =>
  `module m (input a, b, input [3:0] v, output y);\n${statement}\nendmodule\n`

// SOURCE: IEEE 1364-2005 for what is an error; the messages are ours.
const ERRORS: readonly (readonly [string, string, string, RegExp])[] = [
  ['a file without a module', '「」', 'empty-file', /no module/],
  ['text outside a module', '「wire」 x;', 'syntax', /expected "module", found "wire"/],
  ['a missing endmodule', '「module m」 (y); output y;', 'truncated', /has no "endmodule"/],
  ['a missing semicolon', IN_MODULE('buf b1 (y, a)\n「buf」 b2 (y, a);'), 'syntax', /expected ";" or ","/],
  ['a port without a direction', 'module m (a, 「y」); input a; endmodule', 'syntax', /port "y" has no direction/],
  ['a port that is not listed', 'module m (y); output y; input 「a」; endmodule', 'unknown-name', /not in the port list/],
  ['a net with two drivers', IN_MODULE('buf (y, a); buf (「y」, b);'), 'double-driver', /"y" is driven a second time/],
  ['a driven input', IN_MODULE('assign 「a」 = b;'), 'double-driver', /"a" is driven a second time/],
  ['an index outside its vector', IN_MODULE('buf (y, 「v[4]」);'), 'out-of-range', /index 4 is outside "v", which is \[3:0\]/],
  ['an index on a scalar', IN_MODULE('buf (y, 「a[0]」);'), 'syntax', /"a" has one bit/],
  ['a part against its direction', IN_MODULE('assign y = 「v[0:1]」;'), 'syntax', /against the direction/],
  ['a vector at a gate', IN_MODULE('buf (y, 「v」);'), 'width-mismatch', /a terminal of buf is one bit/],
  ['a gate without inputs', IN_MODULE('and 「g (y)」;'), 'pin-count', /found 1 terminal/],
  ['an arithmetic operator', IN_MODULE('assign y = a 「+」 b;'), 'unsupported-construct', /operator "\+" is not supported/],
  ['an unknown macro', IN_MODULE('assign y = 「`FOO」;'), 'unsupported-construct', /text macro "`FOO"/],
  ['an included file', '「`include "other.v"」\nmodule m; endmodule', 'unsupported-construct', /`include/],
  ['an initial block', IN_MODULE('「initial」 y = 0;'), 'unsupported-construct', /"initial" block is behavioural/],
  ['a latch', IN_MODULE('「always」 @(a) y = b;'), 'unsupported-construct', /sensitivity list of levels/],
  ['a reset', IN_MODULE('「always」 @(posedge a or negedge b) y <= b;'), 'unsupported-construct', /only one clock edge/],
  ['an if', IN_MODULE('「always」 @(posedge a) if (b) y <= b;'), 'unsupported-construct', /"if" in an always block/],
  ['a falling edge', IN_MODULE('「always」 @(negedge a) y <= b;'), 'unsupported-construct', /falling edge/],
  ['a function', IN_MODULE('「function」 f; input x; f = x; endfunction'), 'unsupported-construct', /function is behavioural/],
  ['a user-defined primitive', '「primitive」 p (y, a); output y; input a; table 0 : 1; endtable endprimitive', 'unsupported-construct', /user-defined primitive/],
  ['a switch', IN_MODULE('「tran」 t (a, b);'), 'unsupported-construct', /switch primitive tran/],
  ['switches that are no flip-flop', IN_MODULE('nmos 「n」1 (y, a, b);'), 'unsupported-construct', /is no two-phase flip-flop: it has 1 switches/],
  ['a wired net', IN_MODULE('「wand」 w;'), 'unsupported-construct', /a net of type wand/],
  ['a generate block', IN_MODULE('「generate」 if (1) buf (y, a); endgenerate'), 'unsupported-construct', /generate block/],
  ['a memory', IN_MODULE('reg 「r [」0:3];'), 'unsupported-construct', /an array \(memory\)/],
  ['an unknown pin', IN_MODULE('NAND2 u (.A(a), .「BB」(b), .Y(y));'), 'unknown-pin', /cell "NAND2" has no pin "BB"/],
  ['a pin connected twice', IN_MODULE('NAND2 u (.「A」(a), .A(b), .Y(y));'), 'duplicate-declaration', /connected twice/],
  ['too many positions', IN_MODULE('NAND2 「u」 (a, b, y, a);'), 'pin-count', /connects 4 pins by position/],
  ['an unknown port', `module sub (input d); endmodule ${IN_MODULE('sub s (.「dd」(a));')}`, 'unknown-pin', /module "sub" has no port "dd"/],
  ['a module inside itself', `${IN_MODULE('m 「inner」 (a, b, v, y);')}module t (output y); m u (.y(y)); endmodule`, 'unsupported-construct', /contains itself/],
  ['a parameter override', `module sub #(parameter W = 2) (input [W-1:0] d); endmodule ${IN_MODULE('sub #(3) 「s」 (v);')}`, 'unsupported-construct', /overrides parameters/],
  ['two modules of a name', 'module m (output y); endmodule module 「m」 (output y); endmodule', 'duplicate-declaration', /defined a second time/],
  ['two tops', 'module 「m」 (output y); endmodule module n (output y); endmodule', 'unknown-name', /2 modules are instantiated by no other: m, n/],
  ['nothing to observe', 'module 「m」 (input a); endmodule', 'no-outputs', /no output and no scanned flip-flop/],
  ['a wide vector', 'module m (output 「[2000000:0]」 y); endmodule', 'limit', /2000001 bits/],
  ['an open comment', 'module m (output y); endmodule 「/*」 never', 'truncated', /no closing "\*\/"/],
  ['an open string', 'module m (output y); parameter P = 「"never;」\nendmodule', 'syntax', /no closing quote/],
  ['an open conditional', '「`ifdef」 X\nmodule m; endmodule', 'truncated', /no `endif/],
  ['an inversion that padding would change', 'module m (input a, output [1:0] y); assign 「y = ~a」; endmodule', 'width-mismatch', /inverts padding/],
] // prettier-ignore

describe('errors name what and where', () => {
  test.each(ERRORS)('%s', (_, marked, code, message) => {
    const { value, place, all } = firstFinding(marked)
    const finding = all.find((each) => each.code === code)
    expect(finding?.message).toMatch(message)
    expect(finding).toMatchObject({ severity: 'error', file: 'own.v', span: place })
    expect(value).toBeNull()
  })

  test('close names are suggested for pins, modules, keywords and cells', () => {
    const hint = (marked: string) => firstFinding(marked).finding?.hint
    expect(hint(IN_MODULE('NAND2 u (.AA(a), .B(b), .Y(y));'))).toBeDefined()
    expect(hint(IN_MODULE('asign y = a;'))).toBe('Did you mean "assign"?')
    expect(hint(IN_MODULE('NAND3 u (.A(a), .B(b), .Y(y));'))).toMatch(/^Did you mean "NAND2"\?/)
    const text = 'module reader (output y); endmodule'
    const { diagnostics } = readVerilog([{ name: 'own.v', text }], { top: 'readr' })
    expect(diagnostics[0].hint).toBe('Did you mean "reader"?')
  })

  test('reading goes on after an error and reports the next ones, up to fifty', () => {
    const { all } = firstFinding(IN_MODULE('assign y = a + b;\nbuf (y, v[9]);\nassign = ;\nwand w;'))
    expect(all.map((each) => each.code)).toEqual([
      'unsupported-construct',
      'out-of-range',
      'syntax',
      'unsupported-construct',
    ])
    const many = firstFinding(IN_MODULE('buf (y, v[9]);\n'.repeat(80))).all
    expect(many).toHaveLength(51)
    expect(many[50]).toMatchObject({ code: 'too-many', severity: 'error' })
  })

  test('nesting is bounded: parentheses, modules, conditionals', () => {
    const deep = IN_MODULE(`assign y = ${'('.repeat(5000)}a${')'.repeat(5000)};`)
    expect(firstFinding(deep).finding).toMatchObject({ code: 'limit' })
    expect(firstFinding(IN_MODULE(`assign y = ${'~'.repeat(5000)}a;`)).finding).toMatchObject({
      code: 'limit',
    })
    const modules = Array.from(
      { length: 150 },
      (_, at) =>
        `module m${at} (output y); ${at < 149 ? `m${at + 1} u (y);` : 'supply1 s; buf (y, s);'} endmodule`,
    )
    expect(firstFinding(modules.join('\n')).finding).toMatchObject({ code: 'limit' })
    expect(firstFinding('`ifndef A\n'.repeat(200)).finding).toMatchObject({ code: 'limit' })
  })

  test('BOM, CRLF and lone CR are white space', () => {
    const { value, all } = firstFinding(
      '\ufeffmodule m (input a,\r\noutput y);\rbuf (y, a);\r\nendmodule\r\n',
    )
    expect(all).toEqual([])
    expect(value?.circuit.nNets).toBe(2)
  })
})
