import type { Netlist, TestPin } from '../../circuit/netlist.ts'
import { countOnes } from '../../simulate/count-ones.ts'
import type { BitPlane, PatternSet } from '../../simulate/pattern-set.ts'
import type { AssemblyCounts, TimeOnlyReason } from './assemble-patterns.ts'
import { pulsingSignals } from './compile-table.ts'
import type { PinMap } from './match-netlist.ts'
import type { RunCounts } from './run-patterns.ts'
import type { SignalNames } from './signal-names.ts'
import type { StilFindings } from './stil-findings.ts'
import type { StilFile } from './stil-file.ts'

/** What was understood of a STIL file, for a person to check before it is used. Cycles are tester cycles. */
export type StilReport = {
  readonly signals: {
    readonly count: number
    readonly matched: number
    /** Signals of the file that are no pin of the netlist; empty without a netlist. */
    readonly unmatched: readonly string[]
    readonly inputsWithoutSignal: readonly string[]
    readonly outputsWithoutSignal: readonly string[]
  }
  readonly chains: readonly {
    readonly name: string
    readonly scanIn: string
    readonly scanOut: string
    readonly length: number | null
    readonly agrees: boolean | null
  }[]
  /** Pins and their values in capture, as far as the patterns show them. */
  readonly testPins: readonly TestPin[]
  readonly patterns: number
  readonly cycles: {
    readonly total: number
    /** Before the first pattern and after the last: what comes on top of the patterns' own cycles. */
    readonly opening: number
    readonly closing: number
    readonly shift: number
    /** False where a MatchLoop hides how many there are. */
    readonly areExact: boolean
  }
  /** Milliseconds at the file's own periods; null where a period is not given. */
  readonly milliseconds: number | null
  /** Vectors as a tester stores them: a repeated block once, each shift as one. */
  readonly vectors: number
  readonly vectorStatements: number
  readonly timeOnly: readonly {
    readonly reason: TimeOnlyReason
    readonly count: number
    readonly first: number
  }[]
  readonly withoutCapture: number
  /** Patterns without a load on a circuit with flip-flops: the state is taken as X. */
  readonly stateNotLoaded: number
  readonly dependOnPrevious: number
  readonly expects: {
    /** Expected values at outputs, and of them at scan-outs. */
    readonly outputs: number
    readonly scanOuts: number
    /** Expected values of flip-flops as unloaded. */
    readonly unloads: number
    /** Unloads of flip-flops whose clock did not pulse, which are not compared. */
    readonly held: number
    readonly unusedAfterCapture: number
    readonly unusedOtherInputs: number
    readonly unusedThreeState: number
  }
  readonly wrongLengths: readonly {
    readonly chain: string
    readonly found: number
    readonly expected: number
  }[]
  readonly inputsWithoutValue: readonly string[]
  readonly warnings: number
}

export function buildStilReport(parts: {
  file: StilFile
  names: SignalNames
  netlist: Netlist | null
  pins: PinMap
  patterns: PatternSet
  counts: RunCounts
  assembly: AssemblyCounts
  findings: StilFindings
}): StilReport {
  const { file, netlist, pins, patterns, counts, assembly, findings } = parts
  const { names } = file.signals
  const circuit = netlist?.circuit
  const matched = new Set([...pins.inputSignal, ...pins.outputSignal])
  const missing = (nets: Uint32Array | undefined, signals: Int32Array): string[] =>
    Array.from(nets ?? [], (net) => circuit?.names[net] ?? '').filter((_, row) => signals[row] < 0)
  const nOutputs = pins.outputSignal.length
  const scanOuts = new Set(pins.chains.map(({ scanOutSignal }) => scanOutSignal))
  const care = patterns.expected?.care
  const dependOnPrevious = patterns.dependsOnPrevious?.reduce((sum, flag) => sum + flag, 0) ?? 0
  return {
    signals: {
      count: names.length,
      matched: names.filter((_, signal) => matched.has(signal)).length,
      unmatched: circuit === undefined ? [] : names.filter((_, signal) => !matched.has(signal)),
      inputsWithoutSignal: missing(circuit?.inputs, pins.inputSignal),
      outputsWithoutSignal: missing(circuit?.outputs, pins.outputSignal),
    },
    chains: pins.chains.map(({ name, scanIn, scanOut, length, agrees }) => ({
      name,
      scanIn,
      scanOut,
      length,
      agrees,
    })),
    testPins: findTestPins(parts),
    patterns: patterns.nPatterns,
    cycles: {
      total: counts.cycles,
      opening: assembly.openingCycles,
      closing: assembly.closingCycles,
      shift: counts.shiftCycles,
      areExact: !counts.hasMatchLoop,
    },
    milliseconds: counts.timedCycles === counts.cycles ? counts.seconds * 1000 : null,
    vectors: counts.vectors,
    vectorStatements: counts.statements,
    timeOnly: Array.from(assembly.timeOnly, ([reason, seen]) => ({ reason, ...seen })),
    withoutCapture: patterns.withoutCapture?.reduce((sum, flag) => sum + flag, 0) ?? 0,
    stateNotLoaded: pins.nFlipFlops > 0 || netlist === null ? assembly.stateNotLoaded : 0,
    dependOnPrevious,
    expects: {
      outputs: care === undefined ? 0 : countRows(care, (row) => row < nOutputs),
      scanOuts:
        care === undefined
          ? 0
          : countRows(care, (row) => row < nOutputs && scanOuts.has(pins.outputSignal[row])),
      unloads: care === undefined ? 0 : countRows(care, (row) => row >= nOutputs),
      held: assembly.heldUnloads,
      unusedAfterCapture: assembly.unusedExpects.afterCapture,
      unusedOtherInputs: assembly.unusedExpects.otherInputs,
      unusedThreeState: assembly.unusedExpects.threeState,
    },
    wrongLengths: Array.from(assembly.wrongLengths, ([chain, { found, expected }]) => ({
      chain,
      found,
      expected,
    })),
    inputsWithoutValue: Array.from(assembly.inputsWithoutValue, (signal) => names[signal] ?? ''),
    warnings: findings.warnings,
  }
}

function countRows(plane: BitPlane, wanted: (row: number) => boolean): number {
  let count = 0
  for (let row = 0; row < plane.rows; row++) {
    if (!wanted(row)) continue
    const first = row * plane.wordsPerRow
    for (let word = 0; word < plane.wordsPerRow; word++) count += countOnes(plane.words[first + word])
  }
  return count
}

const LOW = 1
const HIGH = 2

/** From so many patterns on, data that never change are taken for a pin that holds still. */
const PATTERNS_THAT_TELL = 20

function findTestPins({
  file,
  names,
  pins,
  patterns,
  assembly,
}: {
  file: StilFile
  names: SignalNames
  pins: PinMap
  patterns: PatternSet
  assembly: AssemblyCounts
}): TestPin[] {
  const { signals } = file
  const { shiftLevels, frameLevels, frameData, pulsedInShift, pulsedInCapture } = assembly
  const resting = pulsingSignals(file, names)
  const scanIns = new Set(pins.chains.map(({ scanInSignal }) => scanInSignal))
  const found: TestPin[] = []
  const hasScan = shiftLevels.some((level) => level !== 0)
  signals.names.forEach((name, signal) => {
    if (signals.direction[signal] === 'Out') return
    const tells = frameData[signal] === 0 || patterns.nPatterns >= PATTERNS_THAT_TELL
    const frame = tells ? frameLevels[signal] : 0
    const value = frame === LOW ? 0 : frame === HIGH ? 1 : 'X'
    const add = (role: TestPin['role'], pinValue: TestPin['value']): void => {
      found.push({ name, role, value: pinValue, from: 'patterns' })
    }
    const rest = resting.get(signal)
    if (rest !== undefined) {
      const clocks = pulsedInShift[signal] === 1 || pulsedInCapture[signal] === 1 || !hasScan
      add(clocks ? 'clock' : 'reset', rest === LOW ? 0 : rest === HIGH ? 1 : 'X')
    } else if (scanIns.has(signal) || signals.scan[signal] === 1) add('scan-in', value)
    else if (shiftLevels[signal] === HIGH && frame === LOW) add('scan-enable', 0)
    else if (shiftLevels[signal] === LOW && frame === HIGH) add('scan-enable', 1)
    else if (value !== 'X' && shiftLevels[signal] === frame) add('fixed', value)
  })
  return found
}
