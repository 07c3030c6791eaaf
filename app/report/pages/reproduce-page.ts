import type { NumberFormats } from '../../contract/format-number.ts'
import type { Block, ReportPage } from '../report-document.ts'
import type { ReportInput } from '../report-input.ts'

/** What went in and how to get the same figures again. */
export function reproducePage(input: ReportInput, formats: NumberFormats): ReportPage {
  const { files, options, circuit, counts, collapsedFaults, faultBase, version, commandLine, notices } = input
  const count = (value: number): string => formats.count(value).value
  const facts = [
    `Circuit ${circuit.name}: ${count(circuit.inputs)} inputs, ${count(circuit.outputs)} outputs, ${count(circuit.flipFlops)} flip-flops, ${count(circuit.gates)} gates.`,
    `${count(counts.all)} stuck-at faults on ${faultBase}, ${count(collapsedFaults)} collapsed; ${count(counts.untestable)} proven untestable, ${count(counts.byChainTest)} by the chain test.`,
  ]
  const blocks: Block[] = [
    { kind: 'title', text: 'How to reproduce this report' },
    { kind: 'text', text: facts.join(' ') },
    { kind: 'heading', text: 'Input files' },
    {
      kind: 'table',
      table: {
        columns: [
          { head: 'Role', holds: 'text' },
          { head: 'File', holds: 'text' },
          { head: 'Bytes', holds: 'number' },
          { head: 'SHA-256', holds: 'code' },
        ],
        rows: files.map(({ role, name, sizeBytes, sha256 }) => [
          role,
          name,
          count(sizeBytes),
          grouped(sha256),
        ]),
        marked: null,
      },
    },
    { kind: 'heading', text: 'Options' },
    {
      kind: 'table',
      table: {
        columns: [
          { head: '', holds: 'text' },
          { head: '', holds: 'text' },
        ],
        rows: [...options.map(({ label, value }) => [label, value]), ['Tallycut', `version ${version}`]],
        marked: null,
      },
    },
    { kind: 'heading', text: 'Command' },
    { kind: 'code', text: commandLine },
    {
      kind: 'text',
      text: 'The same files, options and version give the same figures on any machine, whatever the number of threads. Durations are no part of them.',
    },
  ]
  if (notices.length > 0) blocks.push({ kind: 'heading', text: 'Warnings' }, { kind: 'list', items: notices })
  return { blocks, foot: `Tallycut ${version}` }
}

/** A hash in groups, so that it may break over lines and be compared by eye. */
function grouped(hash: string): string {
  return hash.replace(/.{8}(?=.)/g, '$& ')
}
