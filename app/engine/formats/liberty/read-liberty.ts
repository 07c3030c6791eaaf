import type { CellLibrary, LibraryCell } from '../../circuit/cell-library.ts'
import type { Reading } from '../../source/diagnostic.ts'
import { FindingList, quoted } from '../../source/finding-list.ts'
import type { ReadingProgress } from '../../source/reading-progress.ts'
import type { Source } from '../../source/source.ts'
import { CellReader, type BusType } from './cell-reader.ts'
import { parseLiberty, type LibertyGroup } from './liberty-syntax.ts'

/**
 * Reads a cell library in the Liberty format: what its cells compute and store, which pins are for scan, which cells have
 * nothing to test. Timing, power and geometry are passed over. Functions stay as they are written. A statetable is not
 * read: such a cell is a clock gate, where the library says so, or a black box. Errors: those of the syntax, and a function
 * that names what is no pin; a warning stands for each cell that is read only in part.
 */
export function readLiberty(
  source: Source,
  options: { onProgress?: ReadingProgress } = {},
): Reading<CellLibrary> {
  const findings = new FindingList()
  const library = read(source, findings, options.onProgress)
  const diagnostics = findings.finish()
  return { value: findings.hasErrors ? null : library, diagnostics }
}

function read(
  source: Source,
  findings: FindingList,
  onProgress: ReadingProgress | undefined,
): CellLibrary | null {
  const groups = parseLiberty(source, findings, onProgress)
  if (groups === null) return null
  const library = groups.find((group) => group.name === 'library')
  if (library === undefined) {
    if (!findings.hasErrors) {
      findings.error(
        'wrong-file-type',
        source,
        0,
        Math.min(source.text.length, 1),
        'there is no library group',
        {
          hint: 'A Liberty file begins with "library (NAME) {".',
        },
      )
    }
    return null
  }
  const types = new Map<string, BusType>()
  for (const type of library.groups) if (type.name === 'type') addType(type, types)
  const supplies = library.attributes
    .filter((each) => each.name === 'voltage_map')
    .map((each) => each.values[0]?.text ?? '')
  const cells: LibraryCell[] = []
  const places = new Map<string, number>()
  for (const group of library.groups) {
    if (group.name !== 'cell' || findings.isFull) continue
    const name = group.values[0]?.text ?? ''
    const first = places.get(name)
    if (name === '' || first !== undefined) {
      findings.warn(
        'duplicate-declaration',
        source,
        group.place,
        group.place + 4,
        name === ''
          ? 'a cell without a name is left out'
          : `cell ${quoted(name)} is defined again; the first one counts`,
      )
      continue
    }
    places.set(name, group.place)
    cells.push(new CellReader(source, group, { types, supplies }, findings).read())
  }
  if (cells.length === 0 && !findings.hasErrors) {
    findings.error('empty-file', source, library.place, library.place + 7, 'the library has no cell')
  }
  return { name: library.values[0]?.text ?? '', file: source.name, cells }
}

/** type (NAME) { bit_from : 7; bit_to : 0; bit_width : 8; downto : true; } */
function addType(group: LibertyGroup, types: Map<string, BusType>): void {
  const numberOf = (name: string): number =>
    Number(group.attributes.find((each) => each.name === name)?.values[0]?.text ?? NaN)
  const from = numberOf('bit_from')
  const to = numberOf('bit_to')
  const width = numberOf('bit_width')
  const last = Number.isInteger(to) ? to : from + (Number.isInteger(width) ? width - 1 : 0)
  const name = group.values[0]?.text
  if (
    name !== undefined &&
    Number.isInteger(from) &&
    Number.isInteger(last) &&
    Math.abs(from - last) < 65_536
  ) {
    types.set(name, { from, to: last })
  }
}
