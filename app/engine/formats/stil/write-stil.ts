import type { Netlist } from '../../circuit/netlist.ts'
import { bitAt, type PatternSet } from '../../simulate/pattern-set.ts'
import type { GoodResponse } from '../../simulate/good-machine.ts'
import { expectedSign, inputSign, writablePatterns, type ExportSelection } from '../export-selection.ts'

export type StilExportOptions = {
  /** Stands in the header. */
  readonly title?: string
  /** The good machine's response, where the set itself expects nothing. */
  readonly response?: GoodResponse | null
}

/**
 * Returns the chosen patterns, in that order, as a STIL file (IEEE 1450-1999) that our reader reads back to the same
 * coverage. Loads are stitched anew: the first unload is masked, and a last one follows the last pattern.
 */
export function writeStil(
  patterns: PatternSet,
  netlist: Netlist,
  sequence: ArrayLike<number>,
  options: StilExportOptions = {},
): string {
  return Array.from(stilParts(patterns, netlist, sequence, options)).join('')
}

/** The same text in parts, for files too long for one string. */
export function* stilParts(
  patterns: PatternSet,
  netlist: Netlist,
  sequence: ArrayLike<number>,
  options: StilExportOptions = {},
): Generator<string, void, undefined> {
  const selection: ExportSelection = {
    patterns,
    circuit: netlist.circuit,
    sequence,
    response: options.response ?? null,
  }
  const chosen = writablePatterns(selection)
  const writer = new StilWriter(selection, netlist, chosen)
  yield writer.head(options.title ?? netlist.circuit.name)
  for (let at = 0; at < chosen.length; at++) yield writer.pattern(at)
  yield writer.tail()
}

type ExportChain = {
  readonly name: string
  readonly scanIn: string
  readonly scanOut: string
  /** Columns by cell, the first next to scan-in. */
  readonly flipFlop: readonly number[]
  readonly cellName: readonly string[]
  readonly loadInverted: readonly boolean[]
  readonly unloadInverted: readonly boolean[]
}

/** An input that is an output too takes one character for both: drive 0 and expect L, drive 1 and expect H. */
const DRIVE_AND_EXPECT: Readonly<Record<string, string>> = { '0L': 'a', '1H': 'b' }

class StilWriter {
  private readonly selection: ExportSelection
  private readonly netlist: Netlist
  private readonly chosen: readonly number[]
  private readonly inputs: readonly string[]
  private readonly outputs: readonly string[]
  private readonly chains: readonly ExportChain[]
  private readonly clocks: readonly { readonly name: string; readonly rest: 0 | 1 }[]
  private readonly scanEnables: readonly { readonly name: string; readonly shift: 0 | 1 }[]
  /** Rows of the inputs that are driven, clocks not among them; rows of outputs that are no inputs. */
  private readonly drivenRows: readonly number[]
  /** Rows of the inputs whose values stand with each pattern: scan enables are set by the procedures where they can be. */
  private readonly dataRows: readonly number[]
  private readonly comparedRows: readonly number[]
  private readonly outputRowOf: ReadonlyMap<string, number>
  private readonly groupNames = new Map<string, string>()

  constructor(selection: ExportSelection, netlist: Netlist, chosen: readonly number[]) {
    const { circuit } = netlist
    this.selection = selection
    this.netlist = netlist
    this.chosen = chosen
    this.inputs = Array.from(circuit.inputs, (net) => circuit.names[net] ?? '')
    this.outputs = Array.from(circuit.outputs, (net) => circuit.names[net] ?? '')
    this.outputRowOf = new Map(this.outputs.map((name, row) => [name, row]))
    this.chains = this.usesScan() ? this.listChains() : []
    const isInput = new Set(this.inputs)
    const pins = netlist.report.testPins
    const clocks = pins.flatMap(({ name, role, value }) =>
      role === 'clock' && value !== 'X' ? [{ name, rest: value }] : [],
    )
    const scanEnables = pins.flatMap(({ name, role, value }) =>
      role === 'scan-enable' && value !== 'X'
        ? [{ name, shift: value === 0 ? (1 as const) : (0 as const) }]
        : [],
    )
    const hasScan = this.chains.length > 0
    this.clocks = hasScan && clocks.length === 0 ? [{ name: this.free('assumed_clock'), rest: 0 }] : clocks
    this.scanEnables =
      hasScan && scanEnables.length === 0
        ? [{ name: this.free('assumed_scan_enable'), shift: 1 }]
        : scanEnables
    const isClock = new Set(this.clocks.map(({ name }) => name))
    this.drivenRows = this.inputs.flatMap((name, row) => (isClock.has(name) ? [] : [row]))
    const captureValue = new Map(this.scanEnables.map(({ name, shift }) => [name, shift === 1 ? '0' : '1']))
    this.dataRows = this.drivenRows.filter((row) => {
      const constant = hasScan ? captureValue.get(this.inputs[row]) : undefined
      return chosen.some((pattern) => inputSign(selection.patterns, row, pattern, 'N') !== constant)
    })
    this.comparedRows = this.outputs.flatMap((name, row) => (isInput.has(name) ? [] : [row]))
  }

  head(title: string): string {
    const { chains, clocks } = this
    const inputs = this.drivenRows.map((row) => this.inputs[row])
    const outputs = this.comparedRows.map((row) => this.outputs[row])
    const scanIns = new Set(chains.map(({ scanIn }) => scanIn))
    const scanOuts = new Set(chains.map(({ scanOut }) => scanOut))
    const both = inputs.filter((name) => this.outputRowOf.has(name))
    const extra = this.extraSignals()
    const signals = [
      ...clocks.map(({ name }) => `${quote(name)} In;`),
      ...[...inputs, ...extra.inputs].map(
        (name) =>
          `${quote(name)} ${this.outputRowOf.has(name) ? 'InOut' : 'In'}${scanIns.has(name) ? ' { ScanIn; }' : ';'}`,
      ),
      ...[...outputs, ...extra.outputs].map(
        (name) => `${quote(name)} Out${scanOuts.has(name) ? ' { ScanOut; }' : ';'}`,
      ),
    ]
    const groups = [
      ['inputs', this.dataRows.map((row) => this.inputs[row])],
      ['outputs', outputs],
      ['scan_in', chains.map(({ scanIn }) => scanIn)],
      ['scan_out', chains.map(({ scanOut }) => scanOut)],
      ['driven', [...inputs, ...extra.inputs]],
      ['compared', [...outputs, ...extra.outputs]],
      ['both', both],
    ] as const
    return [
      'STIL 1.0;',
      `Header { Title ${quote(title.replace(/["\r\n]/g, ' '))}; }`,
      'Signals {',
      ...signals.map((line) => `  ${line}`),
      '}',
      'SignalGroups {',
      ...groups.flatMap(([name, members]) =>
        members.length === 0 ? [] : [`  ${this.groupName(name)} = '${members.map(quote).join(' + ')}';`],
      ),
      '}',
      ...this.timing(extra, both),
      ...this.scanStructures(),
      'PatternBurst "chosen" { PatList { "patterns"; } }',
      'PatternExec { PatternBurst "chosen"; }',
      ...this.procedures(),
      'Pattern "patterns" {',
      `  W "main";`,
      `  C { ${this.restState(false)} }`,
      '',
    ].join('\n')
  }

  /** The statements of one pattern; its load unloads the one before. */
  pattern(at: number): string {
    const pattern = this.chosen[at]
    const { patterns } = this.selection
    const drive = this.dataRows.map((row) => this.pinSign(row, pattern)).join('')
    const compare = this.comparedRows.map((row) => expectedSign(this.selection, row, pattern)).join('')
    const data = [
      ...(drive === '' ? [] : [`${this.groupName('inputs')}=${drive};`]),
      ...(compare === '' ? [] : [`${this.groupName('outputs')}=${compare};`]),
    ].join(' ')
    if (this.chains.length === 0) return `  "pattern ${pattern + 1}": V { ${data} }\n`
    const procedure = patterns.withoutCapture?.[pattern] === 1 ? 'observe' : 'capture'
    return `  "pattern ${pattern + 1}": Call "load_unload" {${this.unload(at - 1)}${this.load(pattern)} }\n  Call "${procedure}" { ${data} }\n`
  }

  tail(): string {
    const last = this.chains.length > 0 && this.chosen.length > 0
    return `${last ? `  "last unload": Call "load_unload" {${this.unload(this.chosen.length - 1)} }\n` : ''}}\n`
  }

  private pinSign(row: number, pattern: number): string {
    const driven = inputSign(this.selection.patterns, row, pattern, 'N')
    const output = this.outputRowOf.get(this.inputs[row])
    if (output === undefined) return driven
    return DRIVE_AND_EXPECT[driven + expectedSign(this.selection, output, pattern)] ?? driven
  }

  private load(pattern: number): string {
    const nInputs = this.inputs.length
    return this.chains
      .map(({ scanIn, flipFlop, loadInverted }) => {
        let data = ''
        for (let cell = flipFlop.length - 1; cell >= 0; cell--) {
          const sign = inputSign(this.selection.patterns, nInputs + flipFlop[cell], pattern, 'N')
          data += sign === 'N' || !loadInverted[cell] ? sign : sign === '1' ? '0' : '1'
        }
        return `\n    ${quote(scanIn)}=${data};`
      })
      .join('')
  }

  private unload(at: number): string {
    if (at < 0) return ''
    const pattern = this.chosen[at]
    const nOutputs = this.outputs.length
    return this.chains
      .map(({ scanOut, flipFlop, unloadInverted }) => {
        let data = ''
        for (let cell = flipFlop.length - 1; cell >= 0; cell--) {
          const sign = expectedSign(this.selection, nOutputs + flipFlop[cell], pattern, true)
          data += sign === 'X' || !unloadInverted[cell] ? sign : sign === 'H' ? 'L' : 'H'
        }
        return `\n    ${quote(scanOut)}=${data};`
      })
      .join('')
  }

  /** Scan is written where some pattern loads or unloads a flip-flop; else each pattern is one vector. */
  private usesScan(): boolean {
    const { patterns, circuit } = this.selection
    const nFlipFlops = circuit.flipFlops.length
    const loads = (pattern: number): boolean => {
      for (let flipFlop = 0; flipFlop < nFlipFlops; flipFlop++) {
        const row = circuit.inputs.length + flipFlop
        if (patterns.unknown === null || !bitAt(patterns.unknown, row, pattern)) return true
        if (
          patterns.observed === null ||
          bitAt(patterns.observed, circuit.outputs.length + flipFlop, pattern)
        )
          return true
      }
      return false
    }
    return this.chosen.some(loads)
  }

  /** The netlist's chains; where it has none, one chain through all flip-flops in the netlist's order is assumed. */
  private listChains(): ExportChain[] {
    const { circuit, chains } = this.netlist
    if (chains.length > 0) {
      return chains.map(({ name, scanIn, scanOut, cells }) => ({
        name,
        scanIn,
        scanOut,
        flipFlop: cells.map(({ flipFlop }) => flipFlop),
        cellName: cells.map(({ instance }) => instance),
        loadInverted: cells.map(({ loadInverted }) => loadInverted),
        unloadInverted: cells.map(({ unloadInverted }) => unloadInverted),
      }))
    }
    const flipFlop = Array.from(circuit.flipFlops, (_, at) => at)
    const plain = flipFlop.map(() => false)
    return [
      {
        name: 'assumed_chain',
        scanIn: this.free('assumed_scan_in'),
        scanOut: this.free('assumed_scan_out'),
        flipFlop,
        cellName: Array.from(circuit.flipFlops, (net) => circuit.names[net] ?? ''),
        loadInverted: plain,
        unloadInverted: plain,
      },
    ]
  }

  /** Pins that the assumed scan path needs and the netlist has not. */
  private extraSignals(): { inputs: string[]; outputs: string[] } {
    const isInput = new Set(this.inputs)
    const isOutput = new Set(this.outputs)
    return {
      inputs: [
        ...this.scanEnables.map(({ name }) => name),
        ...this.chains.map(({ scanIn }) => scanIn),
      ].filter((name) => !isInput.has(name)),
      outputs: this.chains.map(({ scanOut }) => scanOut).filter((name) => !isOutput.has(name)),
    }
  }

  private timing(extra: { inputs: string[]; outputs: string[] }, both: readonly string[]): string[] {
    const waveforms = [
      ...(this.drivenRows.length + extra.inputs.length === 0
        ? []
        : [`${this.groupName('driven')} { 01NZ { '0ns' D/U/N/Z; } }`]),
      ...(both.length === 0 ? [] : [`${this.groupName('both')} { ab { '0ns' D/U; '40ns' L/H; } }`]),
      ...(this.comparedRows.length + extra.outputs.length === 0
        ? []
        : [`${this.groupName('compared')} { LHX { '0ns' X; '40ns' L/H/X; } }`]),
      ...this.clocks.map(({ name, rest }) =>
        rest === 0
          ? `${quote(name)} { 01P { '0ns' D/U/D; '50ns' D/U/U; '80ns' D/U/D; } }`
          : `${quote(name)} { 01P { '0ns' D/U/U; '50ns' D/U/D; '80ns' D/U/U; } }`,
      ),
    ]
    return [
      'Timing {',
      '  WaveformTable "main" {',
      "    Period '100ns';",
      '    Waveforms {',
      ...waveforms.map((line) => `      ${line}`),
      '    }',
      '  }',
      '}',
    ]
  }

  private scanStructures(): string[] {
    if (this.chains.length === 0) return []
    return [
      'ScanStructures {',
      ...this.chains.map((chain) => {
        let inverted = false
        const cells = chain.cellName.map((name, cell) => {
          const sign = chain.loadInverted[cell] === inverted ? '' : '! '
          inverted = chain.loadInverted[cell]
          return sign + quote(name)
        })
        const total = chain.flipFlop.length > 0 && chain.loadInverted[0] !== chain.unloadInverted[0]
        if (total !== inverted) cells.push('!')
        return `  ScanChain ${quote(chain.name)} { ScanLength ${chain.flipFlop.length}; ScanIn ${quote(chain.scanIn)}; ScanOut ${quote(chain.scanOut)}; ScanInversion ${Number(total)}; ScanCells ${cells.join(' ')}; }`
      }),
      '}',
    ]
  }

  private procedures(): string[] {
    if (this.chains.length === 0) return []
    const pulses = this.clocks.map(({ name }) => ` ${quote(name)}=P;`).join('')
    const rest = this.clocks.map(({ name, rest }) => ` ${quote(name)}=${rest};`).join('')
    const count = this.chains.length
    const pins = `${this.parameters('inputs', this.dataRows.length)}${this.parameters('outputs', this.comparedRows.length)}`
    const frame = `${this.restState(true)} }`
    return [
      'Procedures {',
      '  "load_unload" {',
      '    W "main";',
      `    C { ${this.restState(false)} }`,
      `    Shift { V { ${this.groupName('scan_in')}=\\r${count} #; ${this.groupName('scan_out')}=\\r${count} #;${pulses} } }`,
      '  }',
      `  "capture" { W "main"; C { ${frame} V {${pins}${pulses} } }`,
      `  "observe" { W "main"; C { ${frame} V {${pins}${rest} } }`,
      '}',
    ]
  }

  /** Every pin at rest: clocks off, test pins at their values, the scan enables as in capture or in shift, the rest 0. */
  private restState(inCapture: boolean): string {
    const values = new Map<string, string>()
    for (const row of this.drivenRows) values.set(this.inputs[row], '0')
    for (const name of this.extraSignals().inputs) values.set(name, '0')
    for (const { name, value } of this.netlist.report.testPins) {
      if (values.has(name) && value !== 'X') values.set(name, String(value))
    }
    for (const { name, shift } of this.scanEnables) values.set(name, String(inCapture ? 1 - shift : shift))
    const driven = [...values.values()].join('')
    const nCompared = this.comparedRows.length + this.extraSignals().outputs.length
    return [
      ...this.clocks.map(({ name, rest }) => `${quote(name)}=${rest};`),
      ...(driven === '' ? [] : [`${this.groupName('driven')}=${driven};`]),
      ...(nCompared === 0 ? [] : [`${this.groupName('compared')}=\\r${nCompared} X;`]),
    ].join(' ')
  }

  private parameters(group: string, width: number): string {
    return width === 0 ? '' : ` ${this.groupName(group)}=\\r${width} #;`
  }

  /** A group's quoted name, which no pin has. */
  private groupName(name: string): string {
    const known = this.groupNames.get(name)
    if (known !== undefined) return known
    const quoted = quote(this.free(name))
    this.groupNames.set(name, quoted)
    return quoted
  }

  /** The name, with underscores behind it as long as a pin has it. */
  private free(name: string): string {
    const taken = new Set([...this.inputs, ...this.outputs])
    let free = name
    while (taken.has(free)) free += '_'
    return free
  }
}

function quote(name: string): string {
  return `"${name}"`
}
