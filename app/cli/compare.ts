import { textOf } from '../contract/format-number.ts'
import type { SetPoint } from '../engine/compare/compare-at-cuts.ts'
import {
  readOtherPatterns,
  readRunFiles,
  simulateFiles,
  type ReadFiles,
} from '../services/on-files/coverage-of-files.ts'
import { compareSets, type MeasuredSet, type SetComparison } from '../services/on-files/compare-sets.ts'
import { readAssumptionFiles } from '../services/on-files/read-assumptions.ts'
import { runsOfProject } from '../services/on-files/runs-of-project.ts'
import { UsageError, type Arguments } from './arguments.ts'
import { circuitJson } from './circuit.ts'
import { ExitCode, type Command, type OptionTable } from './command.ts'
import { warnOfMismatches } from './coverage.ts'
import { simulatorOf } from './simulator-of.ts'
import type { Io } from './io.ts'
import { NETLIST_DETAILS, NETLIST_OPTIONS, netlistArguments } from './netlist-arguments.ts'
import { JSON_OPTION, printJson } from './print-json.ts'
import { aligned, formats, printText } from './print-text.ts'
import type { Terminal } from './terminal.ts'

/** How many names of gained and lost faults are shown to people, and listed in JSON. */
const FAULTS_SHOWN = 10
const FAULTS_LISTED = 10_000

const OPTIONS = {
  ...NETLIST_OPTIONS,
  threads: { value: 'N', help: 'threads that simulate; as many as there are processors where not said' },
  tester: { value: 'FILE.json', help: 'tester by which time is reckoned' },
  product: { value: 'FILE.json', help: 'product by which time is reckoned' },
  'fail-if-worse': { help: 'exit code 1 where a later set covers less than the first' },
  ...JSON_OPTION,
} as const satisfies OptionTable

export const compare: Command = {
  usage: [
    'NETLIST A B … [--tester FILE.json] [--product FILE.json] [--fail-if-worse] [--json]',
    'PROJECT.tallycut RUN RUN … [--fail-if-worse] [--json]',
  ],
  options: OPTIONS,
  details: () => [
    NETLIST_DETAILS,
    'A, B … are pattern files; each is a set of its own, and the first is compared with each of the others: coverage,\n' +
      'faults gained and lost, and both sets as delivered, cut to equal time and to equal coverage.',
    'RUN is the number of a finished run, or PRODUCT/NUMBER where the project has several products. The project file is\n' +
      'read and left as it is.',
    'JSON: sets (name, patterns, detected, coverage, cycles, milliseconds) and pairs (first, second, both, neither, gained\n' +
      'and lost with count and names, equalTime, equalCoverage, isWorse).',
  ],
  examples: [
    'assets/demo/fern.bench assets/demo/fern-a.vec assets/demo/fern-b.vec',
    'chip.v old.stil new.stil --library cells.lib --fail-if-worse --json',
    'chips.tallycut Fern/1 Fern/2',
  ],
  async run(args, terminal, io) {
    const project = args.operands[0]
    const isProject = project !== undefined && /\.tallycut$/i.test(project)
    const { comparison, head } = isProject
      ? await compareRuns(project, args, terminal)
      : await compareFiles(args, terminal, io)
    terminal.clear()
    const worse = comparison.pairs.filter(({ isWorse }) => isWorse)
    if (args.has('json'))
      printJson({ ...head, ...comparisonJson(comparison), warnings: terminal.warnings }, io.stdout)
    else printText(comparisonText(comparison), io.stdout)
    if (worse.length === 0 || !args.has('fail-if-worse')) return ExitCode.Done
    for (const { first, second } of worse) terminal.fail(`${second} covers less than ${first}.`)
    return ExitCode.No
  },
}

type Compared = { readonly comparison: SetComparison; readonly head: object }

async function compareFiles(args: Arguments, terminal: Terminal, io: Io): Promise<Compared> {
  const { netlist, others } = netlistArguments(args)
  if (others.length < 2) throw new UsageError('Two pattern files or more are needed after the netlist.')
  const simulator = simulatorOf(args, io)
  try {
    const { tester, product } = await readAssumptionFiles(
      {
        tester: args.text('tester'),
        product: args.text('product'),
        program: null,
        constraints: null,
        weights: null,
      },
      terminal,
    )
    const sets: MeasuredSet[] = []
    let first: ReadFiles | null = null
    for (const path of others) {
      const files: ReadFiles =
        first === null
          ? await readRunFiles(netlist, [path], terminal)
          : await readOtherPatterns(first, [path], terminal)
      first ??= files
      const run = await simulateFiles(files, { detectionLimit: 1, wantMatrix: false }, simulator, terminal)
      warnOfMismatches(run, terminal)
      sets.push({ name: path, ...run, profile: run.result.profile, tester, product })
    }
    return { comparison: compareSets(sets), head: first === null ? {} : circuitJson(first) }
  } finally {
    simulator.close()
  }
}

async function compareRuns(path: string, args: Arguments, terminal: Terminal): Promise<Compared> {
  const runs = args.operands.slice(1)
  if (runs.length < 2) throw new UsageError('Two runs or more are needed after the project.')
  const given = Object.keys(OPTIONS).filter((name) => args.has(name))
  const unfit = given.find((name) => name !== 'json' && name !== 'fail-if-worse')
  if (unfit !== undefined) throw new UsageError(`--${unfit} has no place here: the project says it.`)
  const { readProject } = await import('../../db/open-project.ts')
  const store = readProject(path)
  try {
    return { comparison: compareSets(await runsOfProject(store, runs, terminal)), head: {} }
  } finally {
    store.close()
  }
}

function comparisonJson({ sets, pairs }: SetComparison): object {
  const listed = (names: readonly string[]): object => ({
    count: names.length,
    faults: names.slice(0, FAULTS_LISTED),
  })
  return {
    sets,
    pairs: pairs.map((pair) => ({
      ...pair,
      gained: listed(pair.gained),
      lost: listed(pair.lost),
    })),
  }
}

function comparisonText({ sets, pairs }: SetComparison): string {
  const { count } = formats
  const parts = [aligned(sets.map((set) => [set.name, pointWords(set)] as const))]
  for (const pair of pairs) {
    const { first, second, both, gained, lost, equalTime, equalCoverage, onlyInFirst, onlyInSecond } = pair
    const rows: [string, string][] = [
      ['Both detect', `${count(both).value} faults`],
      ['Gained', `${count(gained.length).value} faults${some(gained)}`],
      ['Lost', `${count(lost.length).value} faults${some(lost)}`],
    ]
    if (onlyInFirst + onlyInSecond > 0) {
      rows.push([
        'Not compared',
        `${count(onlyInFirst).value} faults of the first netlist alone, ${count(onlyInSecond).value} of the second`,
      ])
    }
    rows.push(
      ['At equal time', `${pointWords(equalTime.first)} → ${pointWords(equalTime.second)}`],
      ['At equal coverage', `${pointWords(equalCoverage.first)} → ${pointWords(equalCoverage.second)}`],
    )
    parts.push(`${first} → ${second}\n${aligned(rows)}`)
  }
  return parts.join('\n\n')
}

function pointWords({ patterns, coverage, milliseconds }: SetPoint): string {
  const { count, coverage: share, milliseconds: time } = formats
  return `${count(patterns).value} patterns, ${textOf(share(coverage))}, ${textOf(time(milliseconds))}`
}

function some(names: readonly string[]): string {
  if (names.length === 0) return ''
  return `: ${names.slice(0, FAULTS_SHOWN).join(', ')}${names.length > FAULTS_SHOWN ? ' …' : ''}`
}
