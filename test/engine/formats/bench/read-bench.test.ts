import { describe, expect, it } from 'vitest'
import { GateKind } from '../../../../app/engine/circuit/circuit.ts'
import { readBench } from '../../../../app/engine/formats/bench/read-bench.ts'
import { formatDiagnostic, placeDiagnostics } from '../../../../app/engine/source/caret-frame.ts'

const read = (text: string) => readBench({ name: 'adder.bench', text })

function findings(text: string) {
  const source = { name: 'adder.bench', text }
  return placeDiagnostics(readBench(source).diagnostics, [source]).map(
    ({ code, line, column }) => `${code} ${line}:${column}`,
  )
}

describe('a .bench file', () => {
  it('reads in any case, order and spacing, with numeric and dotted names and constants', () => {
    const text =
      '\uFEFF# half an adder\r\noutput(Y.0)\r\nY.0 = nand ( 1,\r\n 2 )\r\ninput(1) INPUT(2)\nk = VDD\nz = Xor(k, 1, 2)\nOUTPUT(z)'
    const circuit = read(text).value!.circuit
    expect(circuit.name).toBe('adder')
    expect(circuit.names).toEqual(['Y.0', '1', '2', 'k', 'z'])
    expect([...circuit.kind]).toEqual([
      GateKind.Nand,
      GateKind.Input,
      GateKind.Input,
      GateKind.Const1,
      GateKind.Xor,
    ])
    expect([...circuit.outputs]).toEqual([0, 4])
    expect([...circuit.inputs]).toEqual([1, 2])
  })

  it('orders every gate after its inputs although the file does not', () => {
    const circuit = read('OUTPUT(c)\nc = NOT(b)\nb = NOT(a)\nINPUT(a)\n').value!.circuit
    expect([...circuit.order].map((net) => circuit.names[net])).toEqual(['b', 'c'])
  })

  it('counts an output that is declared twice once, and says so', () => {
    const { value, diagnostics } = read('INPUT(a)\nOUTPUT(a)\nOUTPUT(a)\n')
    expect(value!.circuit.outputs.length).toBe(1)
    expect(diagnostics.map(({ code, severity }) => [code, severity])).toEqual([
      ['duplicate-declaration', 'warning'],
    ])
  })

  it('is refused with every place at once, and reading goes on after each', () => {
    expect(
      findings('INPUT(a)\nOUTPUT(y)\nINPUT(a)\nb = NOT(a, a)\nc = NADN(a)\ny = AND(a, ghost)\nd = (\n'),
    ).toEqual(['double-driver 3:7', 'pin-count 4:5', 'unknown-gate 5:5', 'syntax 7:5'])
  })

  it('names a net that nothing drives, at its first use, with the closest name', () => {
    const { diagnostics } = read('INPUT(enable)\nOUTPUT(y)\ny = NOT(enabel)\n')
    expect(diagnostics[0]).toMatchObject({
      code: 'undriven-net',
      span: { start: 32, end: 38 },
      hint: 'Did you mean "enable"?',
    })
  })

  it('shows a combinational loop as a path', () => {
    const { diagnostics } = read('INPUT(a)\nOUTPUT(x)\nx = AND(a, z)\ny = NOT(x)\nz = NOT(y)\n')
    expect(diagnostics[0]!.code).toBe('combinational-loop')
    expect(diagnostics[0]!.message).toMatch(/: (x → y → z → x|y → z → x → y|z → x → y → z)$/)
  })

  it('shows what is wrong in a caret frame', () => {
    const source = { name: 'adder.bench', text: 'INPUT(a)\nOUTPUT(y)\n\ty = NADN(a, a)\n' }
    const [placed] = placeDiagnostics(readBench(source).diagnostics, [source])
    expect(formatDiagnostic(placed!)).toBe(
      [
        'adder.bench:3:6 - error: "NADN" is no gate of this format; expected one of AND, NAND, OR, NOR, XOR, XNOR, NOT, INV, BUF, BUFF, DFF',
        '2 | OUTPUT(y)',
        '3 |     y = NADN(a, a)',
        '  |         ^^^^',
        '  Did you mean "NAND"?',
      ].join('\n'),
    )
  })

  it.each([
    ['', 'empty-file 1:1'],
    ['# nothing but a comment\n', 'empty-file 1:1'],
    ['INPUT(a)\ny = NOT(a)\n', 'no-outputs 1:1'],
    ['INPUT(a)\nOUTPUT(y)\ny = NOT(a', 'truncated 3:10'],
    ['OUTPUT(y)\ny = DFF()\n', 'pin-count 2:5'],
  ])('%j is refused as %s', (text, finding) => {
    expect(findings(text)).toEqual([finding])
  })

  it('stops after fifty errors and says so', () => {
    const codes = findings('x = FOO(a)\n'.repeat(200))
    expect(codes.length).toBe(51)
    expect(codes.at(-1)).toBe('too-many 50:11')
  })

  it('of one line and a hundred megabytes is refused in good time', () => {
    const started = performance.now()
    const { value } = read('A'.repeat(100_000_000))
    expect(value).toBeNull()
    expect(performance.now() - started).toBeLessThan(5000)
  })
})
