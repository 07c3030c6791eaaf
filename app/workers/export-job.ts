import type { OutputOf } from '../contract/operations.ts'
import { lostBlocks } from '../engine/choose/lost-blocks.ts'
import { REPORT_MEDIA_TYPES, type ReportFormat, reportOfPlan } from '../report/report-of-plan.ts'
import { DeskAnswer } from './desk-answer.ts'
import type { DeskContext } from './desk-context.ts'
import { type PatternFileFormat, patternParts } from './pattern-parts.ts'
import type { ExportFormat, PlanJobs } from './plan-jobs.ts'
import { planAtCut } from './plan-of-run.ts'
import { basisOf, heldDossier, orderOf, type RunDossier } from './run-dossier.ts'

type Input = PlanJobs['make-export']['input']

const EXTENSIONS: Readonly<Record<ExportFormat, string>> = {
  html: 'html',
  pdf: 'pdf',
  xlsx: 'xlsx',
  csv: 'csv',
  vectors: 'vec',
  'patterns-csv': 'csv',
  stil: 'stil',
}

type MadeFile = {
  readonly bytes: Uint8Array<ArrayBuffer>
  readonly mediaType: string
  readonly warnings: string[]
}

/** Makes a report of a cut, or a pattern file with the patterns that it runs. */
export async function exportJob(
  input: Input,
  context: DeskContext<never>,
): Promise<DeskAnswer<OutputOf<'exports.make'>>> {
  const { format, subject } = input
  const dossier = heldDossier(input.key)
  context.report({ phase: 'Writing', share: null })
  const made = await (format === 'html' || format === 'pdf' || format === 'xlsx' || format === 'csv'
    ? reportFile(dossier, input, format)
    : patternFile(dossier, input, format === 'patterns-csv' ? 'csv' : format))
  const stem = `${subject.product} ${subject.patternSet} ${input.cut} patterns`
  const fileName = `${stem.replace(/[^\p{L}\p{N} ._-]+/gu, ' ').replace(/\s+/g, ' ')}.${EXTENSIONS[format]}`
  return new DeskAnswer({ fileName, ...made }, [made.bytes.buffer])
}

async function reportFile(dossier: RunDossier, input: Input, format: ReportFormat): Promise<MadeFile> {
  const bytes = await reportOfPlan(planOf(dossier, input), sourceOf(dossier, input), format)
  return { bytes, mediaType: REPORT_MEDIA_TYPES[format], warnings: [] }
}

function planOf(dossier: RunDossier, input: Input): Parameters<typeof reportOfPlan>[0] {
  const { netlist, faults, profile } = dossier
  const plan = planAtCut(dossier, input)
  const chosen = orderOf(dossier, input.order, input).sequence.subarray(0, plan.result.budget.patterns)
  return { netlist, faults, profile, plan, lost: lostBlocks(basisOf(dossier, input).task, faults, chosen) }
}

function sourceOf({ netlist }: RunDossier, input: Input): Parameters<typeof reportOfPlan>[1] {
  const { subject, assumptions } = input
  const named = (role: string): string[] =>
    subject.files.filter((file) => file.role === role).map(({ name }) => name)
  const order = input.order === 'by-hand' ? 'as-delivered' : input.order
  const commandLine = [
    'npm run -s tallycut -- plan',
    ...named('netlist').slice(0, 1).map(quoted),
    ...named('patterns').map(quoted),
    ...named('library').map((name) => `--library ${quoted(name)}`),
    `--tester tester.json --product product.json --order ${order} --max-patterns ${input.cut}`,
    ...(assumptions.n > 1 ? [`--n ${assumptions.n}`] : []),
    ...(assumptions.constraints === null ? [] : ['--constraints constraints.json']),
    ...(assumptions.weights === null ? [] : ['--weights weights.csv']),
  ].join(' ')
  return {
    date: subject.date,
    version: subject.version,
    subject: `netlist ${subject.netlist}, pattern set ${subject.patternSet}`,
    files: subject.files,
    options: [
      { label: 'Order', value: input.order },
      { label: 'Patterns', value: String(input.cut) },
      { label: 'Detections of each fault', value: String(assumptions.n) },
    ],
    commandLine,
    notices: netlist.report.unusable.map(({ kind, count }) => `${count} × ${kind}: taken as unknown.`),
  }
}

async function patternFile(dossier: RunDossier, input: Input, format: PatternFileFormat): Promise<MadeFile> {
  const { netlist, patterns } = dossier
  const { product, patternSet } = input.subject
  const sequence = orderOf(dossier, input.order, input).sequence.subarray(0, input.cut)
  const title = `${product}, ${patternSet}`
  const { parts, warnings } = await patternParts(netlist, patterns, sequence, format, title)
  const mediaType = format === 'csv' ? 'text/csv; charset=utf-8' : 'text/plain; charset=utf-8'
  return { bytes: joined(parts), mediaType, warnings: [...warnings] }
}

/** Returns texts as one run of bytes, without ever holding them as one string. */
function joined(parts: Iterable<string>): Uint8Array<ArrayBuffer> {
  return new Uint8Array(Buffer.concat(Array.from(parts, (part) => Buffer.from(part))))
}

function quoted(name: string): string {
  return /^[\w./-]+$/.test(name) ? name : `'${name.replaceAll("'", "'\\''")}'`
}
