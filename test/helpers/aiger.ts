/** An and-inverter graph: literal 2v is variable v, 2v + 1 its inverse, 0 constant false (Biere 2007, the AIGER format). */
export type AndInverterGraph = {
  readonly maxVariable: number
  readonly inputs: readonly number[]
  /** Current and next literal. */
  readonly latches: readonly (readonly [number, number])[]
  readonly outputs: readonly number[]
  /** Left side and its two operands. */
  readonly ands: readonly (readonly [number, number, number])[]
  readonly inputNames: readonly string[]
  readonly latchNames: readonly string[]
  readonly outputNames: readonly string[]
}

/** Parses the ASCII form of AIGER with its symbol table. */
export function parseAiger(text: string): AndInverterGraph {
  const lines = text.split('\n')
  const [maxVariable, nInputs, nLatches, nOutputs, nAnds] = lines[0].split(' ').slice(1).map(Number)
  let at = 1
  const take = (count: number): number[][] =>
    lines.slice(at, (at += count)).map((line) => line.split(' ').map(Number))
  const inputs = take(nInputs).map(([literal]) => literal)
  const latches = take(nLatches).map(([current, next]) => [current, next] as const)
  const outputs = take(nOutputs).map(([literal]) => literal)
  const ands = take(nAnds).map(([left, a, b]) => [left, a, b] as const)
  const names: Record<string, string[]> = { i: [], l: [], o: [] }
  for (; at < lines.length && lines[at] !== 'c'; at++) {
    const symbol = /^([ilo])(\d+) (.*)$/.exec(lines[at])
    if (symbol) names[symbol[1]][Number(symbol[2])] = symbol[3]
  }
  return {
    maxVariable,
    inputs,
    latches,
    outputs,
    ands,
    inputNames: names.i,
    latchNames: names.l,
    outputNames: names.o,
  }
}

/** Evaluates 32 patterns at once; `words` holds one word for each input, then each latch. Returns outputs, then next states. */
export function evaluateAiger(graph: AndInverterGraph, words: readonly number[]): number[] {
  const value = new Int32Array(graph.maxVariable + 1)
  graph.inputs.forEach((literal, at) => (value[literal >> 1] = words[at]))
  graph.latches.forEach(([literal], at) => (value[literal >> 1] = words[graph.inputs.length + at]))
  const of = (literal: number): number => (literal & 1 ? ~value[literal >> 1] : value[literal >> 1])
  for (const [left, a, b] of graph.ands) value[left >> 1] = of(a) & of(b)
  return [...graph.outputs.map(of), ...graph.latches.map(([, next]) => of(next))]
}
