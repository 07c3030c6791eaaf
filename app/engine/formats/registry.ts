import type { Netlist } from '../circuit/netlist.ts'
import { joinPatternSets } from '../simulate/pattern-set-builder.ts'
import type { PatternSet } from '../simulate/pattern-set.ts'
import type { Diagnostic, Reading } from '../source/diagnostic.ts'
import type { ReadingProgress } from '../source/reading-progress.ts'
import type { Source } from '../source/source.ts'
import { readBench } from './bench/read-bench.ts'
import { readPatternCsv } from './csv/read-pattern-csv.ts'
import { readStil, type StilOptions } from './stil/read-stil.ts'
import type { StilReport } from './stil/stil-report.ts'
import { readVectors } from './vectors/read-vectors.ts'
import { readVerilog, type VerilogOptions } from './verilog/read-verilog.ts'

/** A netlist format: how its files are known, and its reader. */
export type NetlistFormat = {
  readonly name: string
  readonly label: string
  readonly extensions: readonly string[]
  /** True where the first few thousand characters of a text can only be this format. */
  looksLike(head: string): boolean
  read(sources: readonly Source[], options: VerilogOptions): Reading<Netlist>
}

export type PatternReading = {
  readonly patterns: PatternSet
  /** What only STIL files tell. */
  readonly report: StilReport | null
}

export type PatternOptions = StilOptions & { readonly onProgress?: ReadingProgress }

export type PatternFormat = {
  readonly name: string
  readonly label: string
  readonly extensions: readonly string[]
  looksLike(head: string): boolean
  read(source: Source, netlist: Netlist, options: PatternOptions): Reading<PatternReading>
}

const HEAD = 8192

export const NETLIST_FORMATS: readonly NetlistFormat[] = [
  {
    name: 'bench',
    label: 'Benchmark netlist (.bench)',
    extensions: ['bench'],
    looksLike: (head) =>
      /^\s*(INPUT|OUTPUT)\s*\(/im.test(head) || /^\s*[^\s=(),#]+\s*=\s*\w+\s*\(/m.test(head),
    read: ([source], options) => readBench(source, options),
  },
  {
    name: 'verilog',
    label: 'Structural Verilog (IEEE 1364)',
    extensions: ['v', 'vg', 'sv', 'vh'],
    looksLike: (head) => /^\s*(module\s|`timescale|`define|\(\*)/m.test(head),
    read: readVerilog,
  },
]

const withoutReport = (reading: Reading<PatternSet>): Reading<PatternReading> => ({
  value: reading.value && { patterns: reading.value, report: null },
  diagnostics: reading.diagnostics,
})

export const PATTERN_FORMATS: readonly PatternFormat[] = [
  {
    name: 'stil',
    label: 'STIL (IEEE 1450)',
    extensions: ['stil'],
    looksLike: (head) => /^\s*(\/\/.*\s|\/\*[\s\S]*?\*\/\s*)*STIL\s/.test(head),
    read: readStil,
  },
  {
    name: 'csv',
    label: 'Comma-separated values',
    extensions: ['csv', 'tsv'],
    looksLike: (head) => /[,;\t]/.test(firstLine(head)),
    read: (source, netlist, options) => withoutReport(readPatternCsv(source, netlist.circuit, options)),
  },
  {
    name: 'vectors',
    label: 'Vectors, one pattern a line',
    extensions: ['vec', 'vectors', 'txt', 'pat'],
    looksLike: (head) => /^[01Xx]+(\s|$)/.test(firstLine(head)),
    read: (source, netlist, options) => withoutReport(readVectors(source, netlist.circuit, options)),
  },
]

/** The format of a netlist, by its content, else by its file name; `.bench` where neither tells. */
export function netlistFormatOf(source: Source): NetlistFormat {
  return formatOf(source, NETLIST_FORMATS) ?? NETLIST_FORMATS[0]
}

/** The format of a pattern file, by its content, else by its file name; vectors where neither tells. */
export function patternFormatOf(source: Source): PatternFormat {
  return formatOf(source, PATTERN_FORMATS) ?? PATTERN_FORMATS[PATTERN_FORMATS.length - 1]
}

/** Reads one netlist from its files. A format that takes one file reports the others as left out. */
export function readNetlist(sources: readonly Source[], options: VerilogOptions = {}): Reading<Netlist> {
  const format = netlistFormatOf(sources[0])
  const reading = format.read(sources, options)
  if (format.name !== 'bench' || sources.length === 1) return reading
  const extra: Diagnostic[] = sources.slice(1).map((source) => ({
    code: 'ignored',
    severity: 'error',
    file: source.name,
    span: { start: 0, end: 0 },
    message: 'a .bench netlist is one file; this second one has no place in it',
    hint: 'Give one netlist file, and pattern files after it.',
  }))
  return { value: null, diagnostics: [...reading.diagnostics, ...extra] }
}

/**
 * Reads pattern files in the order given and joins them end to end; each file is at least one burst. No value where one
 * of them has an error.
 */
export function readPatterns(
  sources: readonly Source[],
  netlist: Netlist,
  options: PatternOptions = {},
): Reading<PatternReading> {
  const readings = sources.map((source) => patternFormatOf(source).read(source, netlist, options))
  const diagnostics = readings.flatMap((reading) => reading.diagnostics)
  const values = readings.flatMap((reading) => (reading.value === null ? [] : [reading.value]))
  if (values.length < sources.length) return { value: null, diagnostics }
  return {
    value: {
      patterns: joinPatternSets(values.map((value) => value.patterns)),
      report: values.find((value) => value.report !== null)?.report ?? null,
    },
    diagnostics,
  }
}

function formatOf<F extends NetlistFormat | PatternFormat>(
  source: Source,
  formats: readonly F[],
): F | undefined {
  const head = source.text.slice(0, HEAD)
  const extension = source.name.replace(/\.gz$/i, '').split('.').pop()?.toLowerCase() ?? ''
  const named = formats.find((format) => format.extensions.includes(extension))
  return formats.find((format) => format.looksLike(head)) ?? named
}

function firstLine(head: string): string {
  return head.split(/\r?\n|\r/).find((line) => line.trim() !== '' && !line.startsWith('#')) ?? ''
}
