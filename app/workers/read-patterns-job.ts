import type { DiagnosticView } from '../contract/shapes/diagnostic.ts'
import type { PatternAccount } from '../contract/shapes/pattern-set.ts'
import type { Netlist } from '../engine/circuit/netlist.ts'
import { patternFormatOf, readPatterns, type PatternReading } from '../engine/formats/registry.ts'
import { compareResponse } from '../engine/simulate/compare-response.ts'
import { countOnes } from '../engine/simulate/count-ones.ts'
import { DeskAnswer } from './desk-answer.ts'
import type { DeskContext } from './desk-context.ts'
import { diagnosticViews } from './diagnostic-views.ts'
import { loadNetlist, readAll, type NamedBytes, type NetlistInput } from './load-netlist.ts'
import { packPatterns } from './packed-patterns.ts'

export type ReadPatternsJob = {
  readonly input: {
    readonly netlistKey: string
    readonly netlist: NetlistInput
    readonly files: readonly NamedBytes[]
  }
  readonly output: {
    readonly account: PatternAccount | null
    readonly diagnostics: readonly DiagnosticView[]
    /** The patterns to be kept; empty where there are none. */
    readonly packed: readonly Uint8Array<ArrayBuffer>[]
  }
  readonly part: never
}

/** Reads patterns for a netlist, compares what they expect with the good machine and packs them to be kept. */
export async function readPatternsJob(
  { netlistKey, netlist: netlistInput, files }: ReadPatternsJob['input'],
  context: DeskContext<never>,
): Promise<DeskAnswer<ReadPatternsJob['output']>> {
  context.report({ phase: 'Reading the netlist', share: null })
  const { netlist } = await loadNetlist(netlistKey, netlistInput)
  const { sources, diagnostics } = await readAll(files)
  const isWhole = sources.length === files.length
  const reading = isWhole
    ? readPatterns(sources, netlist, {
        onProgress: (done, total) => {
          context.report({
            phase: 'Reading the patterns',
            share: total > 0 ? Math.min(1, done / total) : null,
          })
          return !context.isCancelled()
        },
      })
    : { value: null, diagnostics: [] }
  const placed = diagnosticViews([...diagnostics, ...reading.diagnostics], sources)
  const [first] = sources
  if (reading.value === null || first === undefined) {
    return new DeskAnswer({ account: null, diagnostics: placed, packed: [] })
  }
  context.report({ phase: 'Comparing expected values', share: null })
  const format = patternFormatOf(first).name
  const account = accountOf(reading.value, netlist, format)
  const packed = packPatterns(reading.value.patterns)
  return new DeskAnswer(
    { account, diagnostics: placed, packed },
    packed.map(({ buffer }) => buffer),
  )
}

function accountOf({ patterns, report }: PatternReading, netlist: Netlist, format: string): PatternAccount {
  const { nPatterns, unknown, cycles, timeOnly, bursts, expected } = patterns
  const given = cycles !== null && cycles.every((count) => count > 0)
  return {
    format,
    patterns: nPatterns,
    timeOnly: {
      patterns: timeOnly?.reduce((sum, flag) => sum + flag, 0) ?? 0,
      reasons: report?.timeOnly.map(({ reason, count }) => `${reason}: ${count}`) ?? [],
    },
    unknownInputs: unknown?.words.reduce((sum, word) => sum + countOnes(word), 0) ?? 0,
    bursts: bursts.map(({ name, count }) => ({ name, patterns: count })),
    cyclesGiven: given ? cycles.reduce((sum, count) => sum + count, 0) : null,
    expected: expected === null ? null : comparisonOf(netlist, patterns),
    signalsUnmatched: [...(report?.signals.unmatched ?? [])],
  }
}

function comparisonOf(netlist: Netlist, patterns: PatternReading['patterns']): PatternAccount['expected'] {
  const { total, first } = compareResponse(netlist, patterns)
  return {
    compared: total.compared,
    mismatches: total.mismatches,
    first: first.map(({ pattern, name, expected }) => ({
      pattern: pattern + 1,
      output: name,
      expected: expected === 1 ? 'H' : 'L',
      simulated: expected === 1 ? 'L' : 'H',
    })),
  }
}
