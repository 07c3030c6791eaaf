import { basename, extname } from 'node:path'
import { shortfallsOf } from '../contract/plan-words.ts'
import type { Goal, Limit } from '../engine/choose/budget.ts'
import { ceilingProof } from '../engine/choose/ceiling-proof.ts'
import { findInstallation, versionOf } from '../installation.ts'
import type { ReportFormat } from '../report/report-of-plan.ts'
import {
  readRunFiles,
  simulateFiles,
  withRecordOf,
  type CoverageRun,
} from '../services/on-files/coverage-of-files.ts'
import { budgetRows } from '../services/on-files/fault-rows.ts'
import { inputFile } from '../services/on-files/input-file.ts'
import { PATTERN_EXTENSIONS, patternParts } from '../workers/pattern-parts.ts'
import type { PlanChoice } from '../services/on-files/plan-choice.ts'
import { planOfFiles, type PlanOfFiles } from '../services/on-files/plan-of-files.ts'
import { planReport, type ReportOrigin } from '../services/on-files/plan-report.ts'
import { checkConstraints, readAssumptionFiles } from '../services/on-files/read-assumptions.ts'
import type { NetlistFiles } from '../services/on-files/read-netlist-files.ts'
import { needsSamples, samplesOf, type SampleRequest, type Samples } from '../services/on-files/sampling.ts'
import { createHighsSolver } from '../workers/highs-solver.ts'
import { UsageError, type Arguments, type NumberRange } from './arguments.ts'
import { ExitCode, type Command } from './command.ts'
import { coverageJson, warnOfMismatches } from './coverage.ts'
import { simulatorOf } from './simulator-of.ts'
import type { Io } from './io.ts'
import { netlistArguments } from './netlist-arguments.ts'
import { planJson } from './plan-json.ts'
import { PLAN_OPTIONS, planDetails } from './plan-options.ts'
import { planText } from './plan-text.ts'
import { printJson } from './print-json.ts'
import { formats, printText } from './print-text.ts'
import type { Terminal } from './terminal.ts'
import { checkOutput, writeFile } from './write-file.ts'

const REPORT_FORMATS: readonly ReportFormat[] = ['html', 'pdf', 'xlsx', 'csv']
const ASSUMPTIONS = ['tester', 'product', 'program', 'constraints', 'weights'] as const
const NO_FAULTS_OF_SAMPLE =
  '--faults lists what becomes of every fault under the budget, and a plan from a sample knows that of the faults drawn alone. Leave it away; "coverage --faults" lists them under the whole set.'
const OUTPUTS = ['faults', 'report', 'export', 'proof'] as const

export const plan: Command = {
  usage: [
    'NETLIST PATTERNS… [--tester FILE.json] [--product FILE.json] [--program FILE.csv]',
    '     [--constraints FILE.json] [--weights FILE.csv] [--n N]',
    '     [--order as-delivered|steepest|smallest] [--improve]',
    '     [--max-patterns N | --max-cycles N | --max-ms T | --min-coverage C | --max-dppm D]',
    '     [--faults FILE.csv] [--report FILE.html|.pdf|.xlsx|.csv] [--export FILE] [--json]',
  ],
  options: PLAN_OPTIONS,
  details: planDetails,
  examples: [
    'assets/demo/fern.bench assets/demo/fern-b.vec --min-coverage 0.97 --report fern.html',
    'chip.v patterns.stil --library cells.lib --tester t1.json --product chip.json --max-ms 9.5 --improve --json',
    'chip.bench set.vec --order smallest --export smallest.vec',
  ],
  async run(args, terminal, io) {
    const request = await requestOf(args)
    const simulator = simulatorOf(args, io)
    try {
      const assumptions = await readAssumptionFiles(request.assumptions, terminal)
      const files = await readRunFiles(request.netlist, request.patterns, terminal)
      const isSampled = needsSamples(files, request.sample)
      if (isSampled && args.text('faults') !== null) throw new UsageError(NO_FAULTS_OF_SAMPLE)
      checkConstraints(assumptions, files.patterns.nPatterns, terminal)
      const limits = { detectionLimit: isSampled ? 1 : 0, wantMatrix: !isSampled }
      const whole = await simulateFiles(files, limits, simulator, terminal)
      const samples = isSampled ? samplesOf(files, whole.result.profile, request.sample) : null
      if (samples !== null) warnOfSamples(samples, request.choice, terminal)
      const run = samples === null ? whole : await withRecordOf(whole, samples.classes, simulator, terminal)
      warnOfMismatches(run, terminal)
      const solver = createHighsSolver(findInstallation(io.entryUrl).thread('highs-worker'))
      const patternFile = basename(request.patterns[0] ?? '')
      const planned = planOfFiles(run, samples, assumptions, request.choice, solver, patternFile, terminal)
      if (samples !== null) warnOfEnd(planned, terminal)
      await writeOutputs(args, request, run, planned, terminal, io)
      terminal.clear()
      if (args.has('json')) {
        const json = { ...coverageJson(run, []), ...planJson(planned), warnings: terminal.warnings }
        printJson(json, io.stdout)
      } else printText(planText(run, planned), io.stdout)
      const shortfalls = shortfallsOf(planned.plan.result, formats)
      for (const shortfall of shortfalls) terminal.fail(shortfall)
      return shortfalls.length > 0 ? ExitCode.No : ExitCode.Done
    } finally {
      simulator.close()
    }
  },
}

type PlanRequest = {
  readonly netlist: NetlistFiles
  readonly patterns: readonly string[]
  readonly assumptions: Readonly<Record<(typeof ASSUMPTIONS)[number], string | null>>
  readonly choice: PlanChoice
  readonly sample: SampleRequest
}

/** Reads and checks everything that the command line alone tells, so that nothing fails after the work is done. */
async function requestOf(args: Arguments): Promise<PlanRequest> {
  const { netlist, others: patterns } = netlistArguments(args)
  if (patterns.length === 0) throw new UsageError('Pattern files are needed after the netlist.')
  const [tester, product, program, constraints, weights] = ASSUMPTIONS.map((name) => args.text(name))
  const assumptions = { tester, product, program, constraints, weights } as PlanRequest['assumptions']
  const inputs = [...netlist.netlist, ...netlist.libraries, ...patterns, ...Object.values(assumptions)]
  for (const name of OUTPUTS) {
    const path = args.text(name)
    if (path !== null)
      await checkOutput(
        name,
        path,
        inputs.filter((input) => input !== null),
      )
  }
  const report = args.text('report')
  if (report !== null) extensionOf('report', report, REPORT_FORMATS)
  const exported = args.text('export')
  if (exported !== null) extensionOf('export', exported, Object.keys(PATTERN_EXTENSIONS))
  return { netlist, patterns, assumptions, choice: choiceOf(args), sample: sampleOf(args) }
}

function sampleOf(args: Arguments): SampleRequest {
  const size = args.number('sample', { least: 1, most: 1e9, whole: true, what: 'a number of faults from 1' })
  const accuracy = args.number('accuracy', { least: 0.0001, most: 0.5, what: 'a share from 0.0001 to 0.5' })
  if (size !== null && accuracy !== null) {
    throw new UsageError('--sample and --accuracy both say how many faults are drawn. Leave one away.')
  }
  const seed = args.number('seed', {
    least: 0,
    most: 2 ** 32 - 1,
    whole: true,
    what: 'a whole number from 0',
  })
  return { size, accuracy, seed: seed ?? 1 }
}

function warnOfSamples(
  { choose, quote, population, isForced }: Samples,
  { order }: PlanChoice,
  terminal: Terminal,
): void {
  const { count } = formats
  const why = isForced ? 'The record of which pattern detects which fault would take more than 1 GB. ' : ''
  terminal.warn(
    `${why}The order is chosen on ${count(choose.size).value} and its coverage quoted from ${count(quote.size).value} other faults of the ${count(population).value} that the whole set detects, drawn at random: figures are estimates, between the limits that are given.`,
  )
  if (order === 'smallest') terminal.warn('The set is complete for the faults drawn, not for all.')
}

/** Under a limit an order ends where the faults drawn show no more gain, although others may gain. */
function warnOfEnd({ plan: { result } }: PlanOfFiles, terminal: Terminal): void {
  const { limits, goals, cut } = result
  if (limits.length === 0 || goals.length > 0 || cut.stop !== null) return
  terminal.warn(
    `After ${formats.count(cut.patterns).value} patterns the faults drawn show no more gain, so the limit is not used up. A larger --sample goes on.`,
  )
}

function choiceOf(args: Arguments): PlanChoice {
  const order = args.text('order') ?? 'steepest'
  if (order !== 'as-delivered' && order !== 'steepest' && order !== 'smallest') {
    throw new UsageError(`--order takes as-delivered, steepest or smallest; "${order}" was given.`)
  }
  const smallestBy = args.text('smallest-by') ?? 'patterns'
  if (smallestBy !== 'patterns' && smallestBy !== 'cycles') {
    throw new UsageError(`--smallest-by takes patterns or cycles; "${smallestBy}" was given.`)
  }
  const detections =
    args.number('n', { least: 1, most: 10, whole: true, what: 'a whole number from 1 to 10' }) ?? 1
  if (order === 'smallest' && detections > 1) {
    throw new UsageError(
      '--order smallest is for one detection of each fault; leave --n away, or order by steepest.',
    )
  }
  const number = (name: string, range: NumberRange): number[] => {
    const value = args.number(name, range)
    return value === null ? [] : [value]
  }
  const count = { least: 0, whole: true, what: 'a whole number from 0' }
  const time = { least: 0, what: 'a number of milliseconds from 0' }
  const limits: Limit[] = [
    ...number('max-patterns', count).map((most) => ({ kind: 'patterns', most }) as const),
    ...number('max-cycles', count).map((most) => ({ kind: 'cycles', most }) as const),
    ...number('max-ms', time).map((most) => ({ kind: 'milliseconds', most }) as const),
    ...number('max-device-ms', time).map((most) => ({ kind: 'deviceMilliseconds', most }) as const),
  ]
  const share = { least: 0, most: 1, what: 'a coverage from 0 to 1' }
  const dppm = { least: 0, most: 1e6, what: 'a number from 0 to 1,000,000' }
  const goals: Goal[] = [
    ...number('min-coverage', share).map((least) => ({ kind: 'coverage', least }) as const),
    ...number('max-dppm', dppm).map((most) => ({ kind: 'dppm', most }) as const),
  ]
  const seconds = { least: 0, most: 86_400, what: 'a number of seconds from 0 to 86,400' }
  return {
    order,
    smallestBy,
    detections,
    limits,
    goals,
    improve: args.has('improve'),
    searchSeconds: args.number('search-seconds', seconds) ?? 30,
  }
}

/** Returns what a file's name ends in. Throws a UsageError where that tells no format. */
function extensionOf<Extension extends string>(
  option: string,
  path: string,
  known: readonly Extension[],
): Extension {
  const extension = known.find((one) => `.${one}` === extname(path).toLowerCase())
  if (extension !== undefined) return extension
  const list = known.map((one) => `.${one}`).join(', ')
  throw new UsageError(`--${option} ${path}: the name tells the format; it must end in one of ${list}.`)
}

async function writeOutputs(
  args: Arguments,
  request: PlanRequest,
  run: CoverageRun,
  planned: PlanOfFiles,
  terminal: Terminal,
  io: Io,
): Promise<void> {
  const { budget } = planned.plan.result
  const chosen = Uint32Array.from(budget.chosen, (pattern) => pattern - 1)
  const faults = args.text('faults')
  if (faults !== null) await writeFile(faults, budgetRows(run, planned.basis.task, chosen))
  const report = args.text('report')
  if (report !== null) {
    terminal.report({ phase: `Writing ${report}`, share: null })
    const origin = await originOf(args, request, io)
    const format = extensionOf('report', report, REPORT_FORMATS)
    await writeFile(report, [await planReport(run, planned, origin, format)])
  }
  const exported = args.text('export')
  if (exported !== null) {
    const extensions = Object.keys(PATTERN_EXTENSIONS) as (keyof typeof PATTERN_EXTENSIONS)[]
    const format = PATTERN_EXTENSIONS[extensionOf('export', exported, extensions)]
    const title = `${run.netlist.circuit.name}, ${budget.patterns} patterns`
    const { parts, warnings } = await patternParts(run.netlist, run.patterns, chosen, format, title)
    for (const warning of warnings) terminal.warn(`--export ${exported}: ${warning}`)
    await writeFile(exported, parts)
  }
  const proof = args.text('proof')
  if (proof !== null) {
    const { task } = planned.basis
    const found = budget.patterns === 0 ? null : ceilingProof(task, planned.ceiling, budget.patterns - 1)
    await writeFile(proof, [`${JSON.stringify(found)}\n`])
  }
}

async function originOf(
  args: Arguments,
  { netlist, patterns, assumptions }: PlanRequest,
  io: Io,
): Promise<ReportOrigin> {
  const roles: [string, readonly string[]][] = [
    ['netlist', netlist.netlist],
    ['library', netlist.libraries],
    ['patterns', patterns],
    ...ASSUMPTIONS.map((name): [string, readonly string[]] => [name, [assumptions[name] ?? []].flat()]),
  ]
  const files = roles.flatMap(([role, paths]) =>
    paths.filter((path) => path !== '-').map((path) => inputFile(role, path)),
  )
  const options = Object.keys(PLAN_OPTIONS).flatMap((name) => {
    const isShown = args.has(name) && !['json', 'threads', ...OUTPUTS].includes(name)
    return isShown ? [{ label: `--${name}`, value: args.list(name).join(', ') }] : []
  })
  return {
    date: new Date().toISOString().slice(0, 10),
    version: versionOf(findInstallation(io.entryUrl)),
    commandLine: ['npm run -s tallycut -- plan', ...args.words.map(quoted)].join(' '),
    files: await Promise.all(files),
    options,
  }
}

function quoted(word: string): string {
  return /^[\w./=,:-]+$/.test(word) ? word : `'${word.replaceAll("'", "'\\''")}'`
}
