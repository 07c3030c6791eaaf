import { expectedSign, inputSign, writablePatterns, type ExportSelection } from '../export-selection.ts'
import { EXPECT_PREFIX } from './read-pattern-csv.ts'

/** Returns the chosen patterns, in their order, as CSV (RFC 4180) that `readPatternCsv` reads. */
export function writePatternCsv(selection: ExportSelection): string {
  return Array.from(patternCsvParts(selection)).join('')
}

/**
 * The same text in parts, for files too long for one string. A flip-flop whose output is a primary output has one name for
 * both: the column expects the output's value, and none the flip-flop's data.
 */
export function* patternCsvParts(selection: ExportSelection): Generator<string, void, undefined> {
  const { circuit, patterns, response } = selection
  const { inputs, outputs, flipFlops, names } = circuit
  const isOutput = new Set(outputs)
  const responseRows =
    patterns.expected === null && !response
      ? []
      : [
          ...Array.from(outputs, (net, row) => ({ net, row })),
          ...Array.from(flipFlops, (net, at) => ({ net, row: outputs.length + at })).filter(
            ({ net }) => !isOutput.has(net),
          ),
        ]
  const hasCycles = patterns.cycles !== null
  const header = [
    ...Array.from([...inputs, ...flipFlops], (net) => names[net]),
    ...responseRows.map(({ net }) => EXPECT_PREFIX + names[net]),
    ...(hasCycles ? ['cycles'] : []),
  ]
  yield `${header.map(quoted).join(',')}\r\n`
  for (const pattern of writablePatterns(selection)) {
    const cells: string[] = []
    for (let row = 0; row < patterns.value.rows; row++) cells.push(inputSign(patterns, row, pattern, 'X'))
    for (const { row } of responseRows) cells.push(expectedSign(selection, row, pattern))
    if (hasCycles) cells.push(patterns.cycles?.[pattern] ? String(patterns.cycles[pattern]) : '')
    yield `${cells.join(',')}\r\n`
  }
}

/** A name as a CSV field; one that could be taken for a comment or holds a separator stands in quotation marks. */
function quoted(name: string): string {
  return /^[^\s#"][^,;\t\r\n"]*$/.test(name) ? name : `"${name.replaceAll('"', '""')}"`
}
