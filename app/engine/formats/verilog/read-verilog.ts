import type { CellLibrary } from '../../circuit/cell-library.ts'
import type { Netlist, TestPin } from '../../circuit/netlist.ts'
import { closestName } from '../../source/closest-name.ts'
import type { Reading } from '../../source/diagnostic.ts'
import { FindingList, quoted } from '../../source/finding-list.ts'
import type { ReadingProgress } from '../../source/reading-progress.ts'
import type { Source } from '../../source/source.ts'
import { assemble } from './assemble.ts'
import { elaborate } from './elaborate.ts'
import type { FlatNetlist } from './flat-netlist.ts'
import { internKeywords } from './keywords.ts'
import { NameTable } from './name-table.ts'
import { itemEnd, Operation, type ParsedModule } from './parsed-module.ts'
import { VerilogParser } from './parser.ts'
import { replaceSwitches } from './switch-flip-flop.ts'

export type VerilogOptions = {
  readonly libraries?: readonly CellLibrary[]
  /** The module to read; without it the one that no other instantiates. */
  readonly top?: string
  /** Values of clock, reset, scan-enable and other pins in test, from the user or the pattern file. */
  readonly testPins?: readonly TestPin[]
  /** Takes every flip-flop of a mapped netlist as scanned, which is a planning assumption and warned about. */
  readonly assumeScanned?: boolean
  readonly onProgress?: ReadingProgress
}

/**
 * Reads a netlist in structural Verilog (IEEE 1364-2005), from one or more files, in its full-scan view.
 *
 * A netlist of gates has the lines that a `.bench` file of the same structure has: each operator of an expression and each
 * plain `assign` is a gate (see VerilogParser), and every D flip-flop whose clock is an input is scanned. Where
 * cells of a library are used, faults sit on the pins of the cells and on those of gates that stand beside them, a plain
 * `assign` is a wire, Liberty functions simulate as they are written, and only flip-flops on a traced scan chain are scanned.
 *
 * Inputs, outputs and flip-flops stand in the order of their declarations, the bits of a vector from the left. Errors come from the
 * text alone where it cannot be parsed, else from all the later steps too.
 */
export function readVerilog(sources: readonly Source[], options: VerilogOptions = {}): Reading<Netlist> {
  const findings = new FindingList()
  const value = read(sources, options, findings)
  const diagnostics = findings.finish()
  return { value: findings.hasErrors ? null : value, diagnostics }
}

function read(sources: readonly Source[], options: VerilogOptions, findings: FindingList): Netlist | null {
  const names = new NameTable()
  internKeywords(names)
  const modules = parseAll(sources, names, findings, options.onProgress)
  if (modules === null || modules.size === 0 || findings.hasErrors) return null
  const top = chooseTop(sources, modules, options.top, names, findings)
  if (top === null) return null
  const cells = (options.libraries ?? []).flatMap((library) => library.cells)
  const flat = elaborate(top, modules, cells, names, findings)
  if (findings.hasErrors) return null
  warnUnknown(flat, modules, cells.map((cell) => cell.name), findings) // prettier-ignore
  const { testPins = [], assumeScanned = false } = options
  return assemble(flat, cells, { top: names.text(top.name), testPins, assumeScanned }, findings)
}

/** All modules of all sources by name id, or null where the caller cancelled. */
function parseAll(
  sources: readonly Source[],
  names: NameTable,
  findings: FindingList,
  onProgress: ReadingProgress | undefined,
): Map<number, ParsedModule> | null {
  const modules = new Map<number, ParsedModule>()
  const total = sources.reduce((sum, source) => sum + source.text.length, 0)
  let before = 0
  for (const source of sources) {
    const offset = before
    const progress = onProgress && ((done: number): boolean => onProgress(offset + done, total))
    const parser = new VerilogParser(source, names, findings, progress)
    if (!parser.parse()) return null
    before += source.text.length
    for (const module of parser.modules) addModule(module, modules, names, findings)
  }
  if (modules.size === 0 && !findings.hasErrors && sources[0]) {
    findings.error('empty-file', sources[0], 0, 0, 'the file has no module', {
      hint: 'Expected "module NAME (…); … endmodule".',
    })
  }
  return modules
}

function addModule(
  module: ParsedModule,
  modules: Map<number, ParsedModule>,
  names: NameTable,
  findings: FindingList,
): void {
  const name = names.text(module.name)
  const first = modules.get(module.name)
  if (first !== undefined) {
    findings.error(
      'duplicate-declaration',
      module.source,
      module.place,
      module.place + name.length,
      `module ${quoted(name)} is defined a second time`,
      {
        notes: [
          {
            file: first.source.name,
            span: { start: first.place, end: first.place + name.length },
            message: 'first defined here',
          },
        ],
      },
    )
    return
  }
  modules.set(module.name, module)
  if (!module.hasSwitches || findings.hasErrors) return
  const reason = replaceSwitches(module)
  if (reason === null) return
  const place = firstSwitch(module)
  findings.error(
    'unsupported-construct',
    module.source,
    place,
    place + 1,
    `module ${quoted(name)} has switch primitives (nmos, pmos) and is no two-phase flip-flop: ${reason}`,
    { hint: 'Describe the cell with gates, or by "always @(posedge CLOCK) Q <= D;".' },
  )
}

function firstSwitch({ items, place }: ParsedModule): number {
  for (let at = 0; at < items.length; at = itemEnd(items.data, at)) {
    if (items.data[at] === Operation.Switch) return items.data[at + 1]
  }
  return place
}

/** The module that is asked for, or the only one that no other instantiates. */
function chooseTop(
  sources: readonly Source[],
  modules: ReadonlyMap<number, ParsedModule>,
  wanted: string | undefined,
  names: NameTable,
  findings: FindingList,
): ParsedModule | null {
  const all = [...modules.values()]
  const nameOf = (module: ParsedModule): string => names.text(module.name)
  if (wanted !== undefined) {
    const found = all.find((module) => nameOf(module) === wanted)
    if (found) return found
    const close = closestName(wanted, all.map(nameOf))
    findings.error('unknown-name', sources[0], 0, 0, `no module is called ${quoted(wanted)}`, {
      hint:
        close === null
          ? `There are: ${all.slice(0, 10).map(nameOf).join(', ')}.`
          : `Did you mean ${quoted(close)}?`,
    })
    return null
  }
  const used = new Set<number>()
  const uses = new Map<ParsedModule, number>()
  for (const module of all) {
    const children = instantiated(module)
    uses.set(module, children.size)
    for (const name of children) used.add(name)
  }
  const roots = all.filter((module) => !used.has(module.name))
  if (roots.length === 1) return roots[0]
  const builders = roots.filter((module) => (uses.get(module) ?? 0) > 0)
  if (builders.length === 1) return builders[0]
  const first = roots[0] ?? all[0]
  const candidates = (roots.length > 0 ? roots : all).slice(0, 10).map(nameOf)
  findings.error(
    'unknown-name',
    first.source,
    first.place,
    first.place + nameOf(first).length,
    roots.length === 0
      ? 'every module is instantiated by another, so none is the top'
      : `${roots.length} modules are instantiated by no other: ${candidates.join(', ')}`,
    { hint: 'Name the top module.' },
  )
  return null
}

/** Names of what a module instantiates. */
function instantiated({ items }: ParsedModule): Set<number> {
  const found = new Set<number>()
  for (let at = 0; at < items.length; at = itemEnd(items.data, at)) {
    if (items.data[at] === Operation.Instance) found.add(items.data[at + 2])
  }
  return found
}

/** Lists each cell that nobody defines once, with its count, at its first instance. */
function warnUnknown(
  flat: FlatNetlist,
  modules: ReadonlyMap<number, ParsedModule>,
  cells: readonly string[],
  findings: FindingList,
): void {
  const counts = new Map<number, { count: number; scope: number; place: number; instance: number }>()
  for (let at = 0; at < flat.boxes.length; at += 6) {
    const [name, scope, instance, place] = flat.boxes.data.subarray(at, at + 4)
    const row = counts.get(name)
    if (row === undefined) counts.set(name, { count: 1, scope, place, instance })
    else row.count++
  }
  const known = [...cells, ...Array.from(modules.values(), (module) => flat.names.text(module.name))]
  for (const [name, { count, scope, place, instance }] of counts) {
    const text = flat.names.text(name)
    const close = closestName(text, known)
    findings.warn(
      'unknown-cell',
      flat.sourceOf(scope),
      place,
      place + flat.names.text(instance).length,
      `${quoted(text)} is defined nowhere: ${count} instance${count === 1 ? ' is a black box' : 's are black boxes'}, ` +
        'whose outputs carry X and whose inputs are not observed',
      {
        hint:
          close === null
            ? 'Add the cell library or the file that defines it.'
            : `Did you mean ${quoted(close)}? Otherwise add the cell library or the file that defines it.`,
      },
    )
  }
}
