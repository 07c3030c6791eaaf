import { quoted } from '../../source/finding-list.ts'
import type { Netlist, ScanChain } from '../../circuit/netlist.ts'
import { Drive, pulsingSignals } from './compile-table.ts'
import type { SignalNames } from './signal-names.ts'
import type { StilFindings } from './stil-findings.ts'
import type { DeclaredChain, StilFile } from './stil-file.ts'

/** How the file's signals map to the netlist's rows. Without a netlist there are no rows: cycles are counted alone. */
export type PinMap = {
  /** The signal of each primary input and each observed output; −1 where the file has none. */
  readonly inputSignal: Int32Array
  readonly outputSignal: Int32Array
  readonly nFlipFlops: number
  readonly chains: readonly ChainMap[]
  /** Signals that clock or reset, each with the level at which it does neither; null where unknown. */
  readonly clocks: readonly { readonly signal: number; readonly rest: 0 | 1 | null }[]
  readonly isClock: Uint8Array
  /** The clock of each flip-flop, −1 where it is not known; null where the netlist has no clocks. */
  readonly clockOf: Int32Array | null
  /** Drive.Low or Drive.High of clocks at rest, by signal; Drive.None of others. */
  readonly restLevel: Uint8Array
  /** Scan enables with their level in capture. */
  readonly scanEnables: readonly { readonly signal: number; readonly capture: 0 | 1 }[]
  /** Signals that drive and are neither clocks nor scan-ins. */
  readonly steadyInputs: Int32Array
  /** 1 for clocks, scan enables and scan-ins, whose values in capture need not be given. */
  readonly isScanPin: Uint8Array
}

/** Columns by cell, the first next to scan-in; empty where it is not known which flip-flops the chain holds. */
export type ChainMap = {
  readonly name: string
  readonly scanIn: string
  readonly scanOut: string
  readonly scanInSignal: number
  readonly scanOutSignal: number
  /** What the netlist or the file says; null where neither does. */
  readonly length: number | null
  readonly flipFlop: Int32Array
  readonly loadInverted: Uint8Array
  readonly unloadInverted: Uint8Array
  /** Whether the file's chain and the netlist's agree; null where only one of them has it. */
  readonly agrees: boolean | null
}

const NO_CELLS = {
  flipFlop: new Int32Array(0),
  loadInverted: new Uint8Array(0),
  unloadInverted: new Uint8Array(0),
}

/** Matches signals, chains, clocks and scan pins; what does not fit is a finding. */
export function matchNetlist(
  file: StilFile,
  names: SignalNames,
  netlist: Netlist | null,
  findings: StilFindings,
): PinMap {
  const { signals } = file
  const nSignals = signals.names.length
  const signalOf = (name: string): number => signals.index.get(name) ?? -1
  const circuit = netlist?.circuit ?? null
  const nameOf = (net: number): string => circuit?.names[net] ?? ''
  const inputs = Array.from(circuit?.inputs ?? [], nameOf)
  const outputs = Array.from(circuit?.outputs ?? [], nameOf)
  const inputSignal = Int32Array.from(inputs, (name) => matching(name, 'Out'))
  const outputSignal = Int32Array.from(outputs, (name) => matching(name, 'In'))

  const chains =
    netlist !== null && netlist.chains.length > 0
      ? netlist.chains.map((chain) => tracedChain(chain, file, signalOf, findings))
      : file.chains.map((chain) => declaredChain(chain, netlist, signalOf, findings))

  const testPins = netlist?.report.testPins ?? []
  const clocks = findClocks()
  const isClock = new Uint8Array(nSignals)
  const restLevel = new Uint8Array(nSignals)
  for (const { signal, rest } of clocks) {
    isClock[signal] = 1
    if (rest !== null) restLevel[signal] = rest === 1 ? Drive.High : Drive.Low
  }
  const scanEnables = testPins.flatMap(({ name, role, value }) => {
    const signal = signalOf(name)
    return role === 'scan-enable' && value !== 'X' && signal >= 0 ? [{ signal, capture: value }] : []
  })
  const isScanPin = isClock.slice()
  for (const { signal } of scanEnables) isScanPin[signal] = 1
  const isScanIn = new Uint8Array(nSignals)
  for (const { scanInSignal } of chains) if (scanInSignal >= 0) isScanIn[scanInSignal] = 1
  signals.scan.forEach((scan, signal) => {
    if (scan === 1) isScanIn[signal] = 1
  })
  const steadyInputs = Int32Array.from(
    signals.names.flatMap((_, signal) =>
      signals.direction[signal] !== 'Out' && isClock[signal] === 0 && isScanIn[signal] === 0 ? [signal] : [],
    ),
  )
  isScanIn.forEach((scan, signal) => {
    if (scan === 1) isScanPin[signal] = 1
  })
  const nFlipFlops = circuit?.flipFlops.length ?? 0
  const clockOf =
    netlist?.clocks === undefined
      ? null
      : Int32Array.from(netlist.clocks, ({ port }) => (port === null ? -1 : signalOf(port)))
  return {
    inputSignal,
    outputSignal,
    nFlipFlops,
    chains,
    clocks,
    clockOf,
    isClock,
    restLevel,
    scanEnables,
    steadyInputs,
    isScanPin,
  }

  function matching(name: string, unlike: 'In' | 'Out'): number {
    const signal = signalOf(name)
    return signal >= 0 && signals.direction[signal] !== unlike ? signal : -1
  }

  /**
   * Pins of the clock and reset roles, and pins that pulse. Where the netlist knows its clocks, or has nothing to clock,
   * another pin of it that pulses is data in return-to-zero form.
   */
  function findClocks(): { signal: number; rest: 0 | 1 | null }[] {
    const found = new Map<number, 0 | 1 | null>()
    const knowsClocks = testPins.some(({ role }) => role === 'clock')
    const clocksNothing = circuit !== null && circuit.flipFlops.length === 0 && testPins.length === 0
    const isInput = new Set(inputSignal)
    for (const [signal, level] of pulsingSignals(file, names)) {
      if (isInput.has(signal) && (knowsClocks || clocksNothing)) continue
      found.set(signal, level === Drive.High ? 1 : level === Drive.Low ? 0 : null)
    }
    for (const { name, role, value } of testPins) {
      const signal = signalOf(name)
      if (signal < 0 || (role !== 'clock' && role !== 'reset')) continue
      found.set(signal, value === 'X' ? (found.get(signal) ?? null) : value)
    }
    return Array.from(found, ([signal, rest]) => ({ signal, rest }))
  }
}

/** A chain of the netlist, checked against the file's chain between the same pins. */
function tracedChain(
  chain: ScanChain,
  file: StilFile,
  signalOf: (name: string) => number,
  findings: StilFindings,
): ChainMap {
  const declared = file.chains.find(
    ({ scanIn, scanOut }) => scanIn === chain.scanIn || (scanOut !== '' && scanOut === chain.scanOut),
  )
  return {
    name: declared?.name ?? chain.name,
    scanIn: chain.scanIn,
    scanOut: chain.scanOut,
    scanInSignal: signalOf(chain.scanIn),
    scanOutSignal: signalOf(chain.scanOut),
    length: chain.cells.length,
    flipFlop: Int32Array.from(chain.cells, ({ flipFlop }) => flipFlop),
    loadInverted: Uint8Array.from(chain.cells, ({ loadInverted }) => Number(loadInverted)),
    unloadInverted: Uint8Array.from(chain.cells, ({ unloadInverted }) => Number(unloadInverted)),
    agrees: declared === undefined ? null : checkChain(declared, chain, findings),
  }
}

function checkChain(declared: DeclaredChain, chain: ScanChain, findings: StilFindings): boolean {
  const { source, span } = declared.place
  const cells = declared.cells.filter(({ name }) => name !== '')
  const length = cells.length > 0 ? cells.length : declared.length
  if (length !== null && length !== chain.cells.length) {
    findings.report(
      'width-mismatch',
      source,
      span,
      `chain ${quoted(declared.name)} has ${length} cells here; the netlist's chain from ${quoted(chain.scanIn)} to ${quoted(chain.scanOut)} has ${chain.cells.length}`,
      'Do the patterns belong to this revision of the netlist?',
    )
    return false
  }
  if (declared.length !== null && declared.length !== length) {
    findings.caution(
      'width-mismatch',
      source,
      span,
      declared.name,
      `chain ${quoted(declared.name)} says ScanLength ${declared.length} and lists ${cells.length} cells`,
    )
  }
  const first = chain.cells[0]
  const inverts = first !== undefined && first.loadInverted !== first.unloadInverted
  let agrees = true
  if (declared.inversion !== null && declared.inversion !== inverts) {
    agrees = false
    findings.caution(
      'width-mismatch',
      source,
      span,
      `inversion ${declared.name}`,
      `chain ${quoted(declared.name)} says ScanInversion ${Number(declared.inversion)}; through the netlist a bit arrives ${inverts ? 'inverted' : 'as it was'}`,
      'The netlist is believed.',
    )
  }
  const different = cells.findIndex(({ name }, at) => !namesCell(name, chain.cells[at]?.instance ?? ''))
  if (different >= 0) {
    agrees = false
    findings.caution(
      'unknown-name',
      source,
      span,
      `cells ${declared.name}`,
      `cell ${different + 1} of chain ${quoted(declared.name)} is ${quoted(cells[different]?.name ?? '')} here and ${quoted(chain.cells[different]?.instance ?? '')} in the netlist`,
      "The netlist's order is believed; expected values that do not fit would show a wrong one.",
    )
  }
  return agrees
}

/** A chain as the file declares it: its cells are looked up by name where the netlist does not trace chains itself. */
function declaredChain(
  chain: DeclaredChain,
  netlist: Netlist | null,
  signalOf: (name: string) => number,
  findings: StilFindings,
): ChainMap {
  const { name, scanIn, scanOut, place } = chain
  const cells = chain.cells.filter((cell) => cell.name !== '')
  const length = cells.length > 0 ? cells.length : chain.length
  const map = {
    name,
    scanIn,
    scanOut,
    scanInSignal: signalOf(scanIn),
    scanOutSignal: signalOf(scanOut),
    length,
  }
  const nothing = { ...map, ...NO_CELLS, agrees: null }
  if (netlist === null || cells.length === 0) return nothing
  const { circuit } = netlist
  const byName = new Map<string, number>()
  circuit.flipFlops.forEach((net, at) => byName.set(circuit.names[net] ?? '', at))
  const flipFlop = Int32Array.from(cells, (cell) => flipFlopOf(cell.name, byName))
  const missing = flipFlop.indexOf(-1)
  if (missing >= 0) {
    unusable(`its cell ${quoted(cells[missing]?.name ?? '')} is no flip-flop of the netlist`)
    return nothing
  }
  if (new Set(flipFlop).size < flipFlop.length) {
    unusable('two of its cells are one flip-flop of the netlist')
    return nothing
  }
  const total = chain.cells.filter(({ invertedBefore }) => invertedBefore).length % 2 === 1
  if (chain.inversion !== null && chain.inversion !== total) {
    unusable(
      'its ScanInversion does not fit the "!" between its cells, so it is not clear which bits are inverted',
    )
    return nothing
  }
  let inverted = false
  const loadInverted = Uint8Array.from(cells, ({ invertedBefore }) => {
    inverted = inverted !== invertedBefore
    return Number(inverted)
  })
  const unloadInverted = loadInverted.map((load) => Number(total !== (load === 1)))
  return { ...map, flipFlop, loadInverted, unloadInverted, agrees: null }

  function unusable(why: string): void {
    findings.caution(
      'not-scanned',
      place.source,
      place.span,
      name,
      `the loads of chain ${quoted(name)} can't be used: ${why}`,
      'Its flip-flops are taken as unknown and not observed.',
    )
  }
}

/** True where a cell's name in a pattern file, `top.u1/ff3.SI` say, names that instance. */
function namesCell(cell: string, instance: string): boolean {
  if (cell === instance) return true
  const parts = cell.split(/[./]/)
  const wanted = instance.split(/[./]/)
  for (let from = 0; from + wanted.length <= parts.length; from++) {
    if (wanted.every((part, at) => parts[from + at] === part)) return true
  }
  return false
}

/** The flip-flop that a cell's name, or the longest part of it without its first or last words, names; −1 where none. */
function flipFlopOf(cell: string, byName: ReadonlyMap<string, number>): number {
  const words = cell.split(/[./]/)
  for (let length = words.length; length > 0; length--) {
    for (let from = 0; from + length <= words.length; from++) {
      for (const joint of ['/', '.']) {
        const found = byName.get(words.slice(from, from + length).join(joint))
        if (found !== undefined) return found
      }
    }
  }
  return -1
}
