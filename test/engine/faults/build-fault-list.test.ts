import { describe, expect, it } from 'vitest'
import { buildFaultList } from '../../../app/engine/faults/build-fault-list.ts'
import { faultName } from '../../../app/engine/faults/fault-list.ts'
import { readBench } from '../../../app/engine/formats/bench/read-bench.ts'
import { readVectors } from '../../../app/engine/formats/vectors/read-vectors.ts'
import { simulateTwin } from '../../../app/engine/simulate/twin.ts'

function circuitOf(text: string) {
  const { value, diagnostics } = readBench({ name: 'test.bench', text })
  if (value === null) throw new Error(diagnostics.map((finding) => finding.message).join('\n'))
  return value.circuit
}

function detectedBy(text: string, patterns: string[]): number {
  const circuit = circuitOf(text)
  const faults = buildFaultList(circuit)
  const reading = readVectors({ name: 'test.vec', text: patterns.join('\n') }, circuit)
  if (reading.value === null) throw new Error('patterns do not read')
  const task = {
    circuit,
    faults,
    patterns: reading.value,
    detectionLimit: 0,
    classes: null,
    wantMatrix: false,
  }
  const { detections } = simulateTwin(task)!.profile
  return detections.reduce((sum, count, group) => sum + (count > 0 ? faults.classSize[group] : 0), 0)
}

const NAND = 'INPUT(a)\nINPUT(b)\nOUTPUT(y)\ny = NAND(a, b)\n'

describe('the faults of a circuit', () => {
  // SOURCE: domain of single stuck-at faults on a two-input NAND; common practice, no source.
  it('are six on a two-input NAND, which 01, 11, 10 detect, no two patterns do', () => {
    expect(buildFaultList(circuitOf(NAND)).nFaults).toBe(6)
    expect(detectedBy(NAND, ['01', '11', '10'])).toBe(6)
    expect(detectedBy(NAND, ['11', '01'])).toBe(5)
    expect(detectedBy(NAND, ['11', '00'])).toBe(4)
    const all = ['00', '01', '10', '11']
    const pairs = all.flatMap((one, at) => all.slice(at + 1).map((other) => detectedBy(NAND, [one, other])))
    expect(Math.max(...pairs)).toBe(5)
  })

  // SOURCE: two faults a line, common practice, no source.
  it('are 18 on a circuit of nine lines', () => {
    const text = [
      'INPUT(a)\nINPUT(b)\nINPUT(c)\nOUTPUT(y)\nOUTPUT(z)',
      'm = AND(a, b)',
      'y = OR(m, c)',
      'z = NOT(m)',
    ].join('\n')
    const faults = buildFaultList(circuitOf(text))
    // Lines: stems a, b, c, m, y, z and branches of m to y and z make eight; an output tap beside a gate makes a ninth.
    expect(faults.lines.n).toBe(8)
    const tapped = buildFaultList(circuitOf(text.replace('OUTPUT(z)', 'OUTPUT(z)\nOUTPUT(m)')))
    expect(tapped.lines.n).toBe(9)
    expect(tapped.nFaults).toBe(18)
  })

  it('stand on stems and branches by name, with taps and flip-flop data as destinations', () => {
    const text = 'INPUT(a)\nOUTPUT(n)\nOUTPUT(q)\nn = NAND(a, q)\nq = DFF(n)\nm = NOT(n)\nOUTPUT(m)\n'
    const faults = buildFaultList(circuitOf(text))
    const names = Array.from({ length: faults.nFaults }, (_, fault) => faultName(faults, fault))
    expect(names.filter((name) => name.endsWith('/0'))).toEqual([
      'a/0',
      'n/0',
      'n>q.0/0',
      'n>m.0/0',
      'n>@n/0',
      'q/0',
      'q>n.1/0',
      'q>@q/0',
      'm/0',
    ])
  })

  it('of a net with one destination share its line, and two pins of one gate on one net are two branches', () => {
    expect(buildFaultList(circuitOf('INPUT(a)\nOUTPUT(y)\ny = NOT(a)\n')).lines.n).toBe(2)
    expect(buildFaultList(circuitOf('INPUT(a)\nOUTPUT(y)\ny = AND(a, a)\n')).lines.n).toBe(4)
  })

  it('are equivalent through one-input gates of any name, never through XOR or a flip-flop', () => {
    const classes = (gate: string): number =>
      buildFaultList(circuitOf(`INPUT(a)\nINPUT(b)\nOUTPUT(y)\nm = ${gate}\ny = NAND(m, b)\n`)).nClasses
    expect(classes('BUFF(a)')).toBe(classes('AND(a)'))
    expect(classes('NOT(a)')).toBe(classes('NOR(a)'))
    expect(classes('NOT(a)')).toBe(4)
    const xor = buildFaultList(circuitOf('INPUT(a)\nINPUT(b)\nOUTPUT(y)\ny = XOR(a, b)\n'))
    expect(xor.nClasses).toBe(6)
    const flipFlop = buildFaultList(circuitOf('INPUT(a)\nOUTPUT(q)\nq = DFF(a)\n'))
    expect(flipFlop.nClasses).toBe(4)
  })
})
