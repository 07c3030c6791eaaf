// Measures the simulation kernel and the readers, and writes the figures to out/bench as JSON and as a table.
import { execFileSync } from 'node:child_process'
import { existsSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { availableParallelism, cpus, loadavg, tmpdir } from 'node:os'
import { join } from 'node:path'
import { parseArgs } from 'node:util'
import { createRandom } from '../../app/engine/source/random.ts'
import { median, type RowOrder, type RowResult } from './bench-row.ts'
import { CIRCUITS, MILLION } from './circuits.ts'
import { hasYardstick } from './yardstick.ts'

const HELP = `Measures the simulation kernel and the readers of big files: npm run bench -- [options]

  --quick         two circuits, 2,000 patterns, three runs each; files of 10 MB in place of 100
  --million       also a circuit of a million gates (minutes)
  --circuit NAME  only circuits of this name, no readers; may be repeated
  --patterns N    random patterns (10000)
  --runs N        runs of each row, of which the median is shown (5)

Needs a built kernel; a native second opinion at ../shared/tools/yardstick is run in turn with ours where it is present.`

const { values } = parseArgs({
  options: {
    quick: { type: 'boolean', default: false },
    million: { type: 'boolean', default: false },
    circuit: { type: 'string', multiple: true },
    patterns: { type: 'string' },
    runs: { type: 'string' },
    help: { type: 'boolean', default: false },
  },
})

const MODES: readonly RowOrder['mode'][] = [
  'all counted',
  'first detection',
  'all counted, 1 % X',
  'up to 10',
  'matrix',
]
const root = join(import.meta.dirname, '../..')

type Row = RowOrder & RowResult
type ReadingRow = {
  readonly format: string
  readonly megabytes: number
  readonly seconds: number
  readonly peakMegabytes: number
}
type CommandRow = {
  readonly circuit: string
  readonly seconds: number
  readonly peakMegabytes: number | null
}

if (values.help) console.log(HELP)
else bench()

function bench(): void {
  const nPatterns = Number(values.patterns ?? (values.quick ? 2000 : 10_000))
  const runs = Number(values.runs ?? (values.quick ? 3 : 5))
  const names = CIRCUITS.map(({ name }) => name)
  const chosen =
    values.circuit ??
    (values.quick ? ['multiplier-24', names.includes('b21') ? 'b21' : 'random-20000'] : names)
  const shared = { nPatterns, runs, yardstick: hasYardstick }
  const orders: RowOrder[] = chosen.flatMap((circuit) => [
    ...MODES.map((mode) => ({ ...shared, circuit, mode, threads: 1 })),
    { ...shared, circuit, mode: 'all counted' as const, threads: 2 },
    { ...shared, circuit, mode: 'first detection' as const, threads: 2 },
  ])
  if (values.million) {
    orders.push({
      ...shared,
      circuit: MILLION.name,
      mode: 'first detection',
      threads: 2,
      runs: 1,
      yardstick: false,
    })
  }
  const readings = values.circuit === undefined ? measureReading(values.quick ? 10 : 100) : []
  const rows: Row[] = []
  for (const order of orders) {
    process.stderr.write(
      `${order.circuit}, ${order.mode}, ${order.threads} thread${order.threads > 1 ? 's' : ''} …\n`,
    )
    const printed = execFileSync(
      process.execPath,
      ['--max-old-space-size=6144', join(import.meta.dirname, 'measure-row.ts'), JSON.stringify(order)],
      { encoding: 'utf8', stdio: ['ignore', 'pipe', 'inherit'] },
    )
    rows.push({ ...order, ...(JSON.parse(printed) as RowResult) })
  }
  const commands = wholeCommands(chosen, nPatterns, runs)
  const table = tableOf(rows, commands, readings)
  const folder = join(root, 'out/bench')
  mkdirSync(folder, { recursive: true })
  writeFileSync(
    join(folder, 'bench.json'),
    JSON.stringify({ machine: machine(), rows, commands, readings }, null, 2),
  )
  writeFileSync(join(folder, 'bench.md'), table)
  console.log(table)
}

/** Reads a generated file of each format, in a process of its own each. */
function measureReading(megabytes: number): ReadingRow[] {
  return ['verilog', 'stil'].map((format) => {
    process.stderr.write(`reading ${megabytes} MB of ${format} …\n`)
    const printed = execFileSync(
      process.execPath,
      [join(import.meta.dirname, 'measure-reading.ts'), format, String(megabytes)],
      { encoding: 'utf8', stdio: ['ignore', 'pipe', 'inherit'] },
    )
    return JSON.parse(printed) as ReadingRow
  })
}

/** Runs the command line from its start to its JSON, where it has been built. */
function wholeCommands(names: readonly string[], nPatterns: number, runs: number): CommandRow[] {
  const script = join(root, 'out/node/cli.js')
  if (!existsSync(script)) return []
  const folder = mkdtempSync(join(tmpdir(), 'tallycut-bench-'))
  try {
    return CIRCUITS.filter(({ name }) => names.includes(name)).map(({ name, text }) => {
      const netlist = join(folder, `${name}.bench`)
      const patterns = join(folder, `${name}.txt`)
      writeFileSync(netlist, text())
      writeFileSync(patterns, randomVectors(text(), nPatterns))
      const seconds = Array.from({ length: runs }, () => {
        const started = performance.now()
        execFileSync(process.execPath, [script, 'coverage', netlist, patterns, '--json'], {
          stdio: ['ignore', 'pipe', 'ignore'],
          maxBuffer: 2 ** 28,
        })
        return (performance.now() - started) / 1000
      })
      return { circuit: name, seconds: median(seconds), peakMegabytes: peakOf(script, netlist, patterns) }
    })
  } finally {
    rmSync(folder, { recursive: true })
  }
}

/** Peak memory of one more run, as GNU time tells it; null where that is not installed. */
function peakOf(script: string, netlist: string, patterns: string): number | null {
  if (!existsSync('/usr/bin/time')) return null
  const report = join(netlist, '..', 'peak.txt')
  const command = [process.execPath, script, 'coverage', netlist, patterns, '--json']
  execFileSync('/usr/bin/time', ['-f', '%M', '-o', report, ...command], { stdio: 'ignore' })
  return Number(execFileSync('cat', [report], { encoding: 'utf8' })) / 1024
}

/** One 0 or 1 for each input and flip-flop of the netlist, a pattern a line. */
function randomVectors(netlist: string, nPatterns: number): string {
  const width = (netlist.match(/^\s*INPUT\(|=\s*DFF\(/gm) ?? []).length
  const random = createRandom(2026)
  const line = (): string => Array.from({ length: width }, () => random.below(2)).join('')
  return Array.from({ length: nPatterns }, line).join('\n') + '\n'
}

function tableOf(
  rows: readonly Row[],
  commands: readonly CommandRow[],
  readings: readonly ReadingRow[],
): string {
  const head = [
    'circuit',
    'gates',
    'faults',
    'patterns',
    'mode',
    'threads',
    'seconds',
    'pairs/s',
    'peak MB',
    'kernel MB',
    'to the slow one',
    'to the yardstick',
    'to one thread',
    'same results',
  ]
  const body = rows.map((row) => [
    row.circuit,
    row.gates.toLocaleString('en'),
    row.faults.toLocaleString('en'),
    row.nPatterns.toLocaleString('en'),
    row.mode,
    String(row.threads),
    row.seconds.toFixed(4),
    row.pairsPerSecond.toExponential(2),
    row.peakMegabytes.toFixed(0),
    row.kernelMegabytes.toFixed(0),
    `${row.toTwin.toFixed(0)} ×`,
    row.toYardstick === null ? '–' : row.toYardstick.toFixed(2),
    row.toOneThread === null ? '–' : row.toOneThread.toFixed(2),
    row.agrees === null ? '–' : row.agrees ? 'yes' : 'NO',
  ])
  const whole = commands.map((row) => [
    row.circuit,
    row.seconds.toFixed(2),
    row.peakMegabytes?.toFixed(0) ?? '–',
  ])
  const note = !hasYardstick ? 'No native second opinion was present; its columns are empty.\n\n' : ''
  return (
    `# Simulation kernel\n\n${machine()}. Medians; random patterns; faults and pairs uncollapsed.\n\n${note}` +
    markdown(head, body) +
    '\n## Whole command, from start to JSON, first detection\n\n' +
    (whole.length === 0
      ? 'The command line has not been built.\n'
      : markdown(['circuit', 'seconds', 'peak MB'], whole)) +
    (readings.length === 0
      ? ''
      : '\n## Reading, from text to netlist or patterns\n\n' +
        markdown(
          ['format', 'MB', 'seconds', 'MB/s', 'peak MB, the text included'],
          readings.map(({ format, megabytes, seconds, peakMegabytes }) => [
            format,
            megabytes.toFixed(1),
            seconds.toFixed(2),
            (megabytes / seconds).toFixed(1),
            peakMegabytes.toFixed(0),
          ]),
        ))
  )
}

function markdown(head: readonly string[], rows: readonly (readonly string[])[]): string {
  const line = (cells: readonly string[]): string => `| ${cells.join(' | ')} |\n`
  return line(head) + line(head.map(() => '---')) + rows.map(line).join('')
}

function machine(): string {
  const [load] = loadavg()
  return `${cpus()[0]?.model.trim() ?? 'unknown processor'}, ${availableParallelism()} cores, load ${load.toFixed(1)}, Node ${process.versions.node}`
}
