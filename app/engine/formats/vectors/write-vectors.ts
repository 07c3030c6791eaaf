import { expectedSign, inputSign, writablePatterns, type ExportSelection } from '../export-selection.ts'

/** Returns the chosen patterns, in their order, as the plain vectors file that `readVectors` reads. */
export function writeVectors(selection: ExportSelection): string {
  return Array.from(vectorsParts(selection)).join('')
}

/** The same text in parts, for files too long for one string. */
export function* vectorsParts(selection: ExportSelection): Generator<string, void, undefined> {
  const { circuit, patterns, response } = selection
  const { inputs, outputs, flipFlops, names } = circuit
  const list = (nets: Uint32Array): string => Array.from(nets, (net) => names[net]).join(' ')
  yield `# ${circuit.name}: ${inputs.length} inputs, ${flipFlops.length} flip-flops, ${outputs.length} outputs\n`
  yield `# inputs: ${list(inputs)}\n# flip-flops: ${list(flipFlops)}\n# outputs: ${list(outputs)}\n`
  const nResponses = patterns.expected === null && !response ? 0 : outputs.length + flipFlops.length
  for (const pattern of writablePatterns(selection)) {
    let line = ''
    for (let row = 0; row < patterns.value.rows; row++) line += inputSign(patterns, row, pattern, 'X')
    if (nResponses > 0) line += ' '
    for (let row = 0; row < nResponses; row++) line += expectedSign(selection, row, pattern)
    const cycles = patterns.cycles?.[pattern] ?? 0
    yield cycles > 0 ? `${line} @${cycles}\n` : `${line}\n`
  }
}
