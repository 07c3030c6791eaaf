import type { Reading } from '../source/diagnostic.ts'
import type { Source } from '../source/source.ts'
import { type AssumptionField, type Contradiction, defaultsOf, readAssumptions } from './assumption-field.ts'

/** A tester on the test floor: its rates, its memory, its sites and its price. Null is explained at each field. */
export type Tester = {
  readonly name: string
  readonly shiftMHz: number
  readonly captureMHz: number | null
  readonly vectorMHz: number | null
  readonly vectorMemory: number | null
  readonly scanMemory: number | null
  readonly reloadMs: number | null
  readonly sites: number
  readonly multiSiteEfficiency: number
  readonly indexMs: number
  readonly costPerHour: number
  readonly currency: string
  readonly utilisation: number
}

const RATE = { kind: 'number', above: 0, max: 100_000 } as const
const CYCLES = { kind: 'number', min: 1, max: 1e15, whole: true } as const
const SHARE = { kind: 'number', above: 0, max: 1 } as const

/** Every key of a tester file, in the order in which forms and reports show them. */
export const TESTER_FIELDS: readonly AssumptionField<Tester>[] = [
  {
    key: 'name',
    label: 'Name',
    unit: '',
    shape: { kind: 'text' },
    default: 'Tester',
    nullMeans: '',
    explanation: 'How the tester is called in lists and reports.',
  },
  {
    key: 'shiftMHz',
    label: 'Shift rate',
    unit: 'MHz',
    shape: RATE,
    default: 20,
    nullMeans: '',
    explanation: 'Scan bits a second into each chain; the slowest part of chain, board and tester sets it.',
  },
  {
    key: 'captureMHz',
    label: 'Capture rate',
    unit: 'MHz',
    shape: { kind: 'or-null', of: RATE },
    default: null,
    nullMeans: 'the shift rate',
    explanation: 'The rate of capture cycles between two shifts.',
  },
  {
    key: 'vectorMHz',
    label: 'Vector rate',
    unit: 'MHz',
    shape: { kind: 'or-null', of: RATE },
    default: null,
    nullMeans: 'the shift rate',
    explanation: 'Vectors a second where the circuit is not scanned.',
  },
  {
    key: 'vectorMemory',
    label: 'Vector memory',
    unit: 'cycles per pin',
    shape: { kind: 'or-null', of: CYCLES },
    default: null,
    nullMeans: 'not limited',
    explanation: 'How many cycles per pin fit before the tester must load again.',
  },
  {
    key: 'scanMemory',
    label: 'Scan memory',
    unit: 'cycles per pin',
    shape: { kind: 'or-null', of: CYCLES },
    default: null,
    nullMeans: 'scan data sit in the vector memory',
    explanation: 'Depth of a memory of its own for scan data, where the tester has one.',
  },
  {
    key: 'reloadMs',
    label: 'Reload',
    unit: 'ms',
    shape: { kind: 'or-null', of: { kind: 'number', min: 0, max: 1e9 } },
    default: null,
    nullMeans: 'a reload is forbidden: the memory is a hard limit',
    explanation: 'What each reload of the memory costs a touchdown.',
  },
  {
    key: 'sites',
    label: 'Sites',
    unit: '',
    shape: { kind: 'number', min: 1, max: 4096, whole: true },
    default: 1,
    nullMeans: '',
    explanation: 'Devices that are tested in one touchdown.',
  },
  {
    key: 'multiSiteEfficiency',
    label: 'Multi-site efficiency',
    unit: '',
    shape: { kind: 'number', min: 0, max: 1 },
    default: 0.95,
    nullMeans: '',
    explanation:
      'Measured on the whole program: 1 where further sites cost no time, 0 where they run one after the other.',
  },
  {
    key: 'indexMs',
    label: 'Index time',
    unit: 'ms',
    shape: { kind: 'number', min: 0, max: 1e9 },
    default: 0,
    nullMeans: '',
    explanation: 'From the end of one touchdown to the start of the next: prober or handler.',
  },
  {
    key: 'costPerHour',
    label: 'Rate',
    unit: 'money an hour',
    shape: { kind: 'number', min: 0, max: 1e9 },
    default: 60,
    nullMeans: '',
    explanation: 'What an hour of use costs; idle hours are in it already.',
  },
  {
    key: 'currency',
    label: 'Currency',
    unit: '',
    shape: { kind: 'text' },
    default: '€',
    nullMeans: '',
    explanation: 'The sign that stands before sums of money.',
  },
  {
    key: 'utilisation',
    label: 'Utilisation',
    unit: '',
    shape: SHARE,
    default: 0.85,
    nullMeans: '',
    explanation: 'The share of a tester’s hours that it tests; for capacity only, never for cost.',
  },
]

export const DEFAULT_TESTER: Tester = defaultsOf(TESTER_FIELDS)

/** Reads a tester file. Codes: those of readAssumptions. */
export function readTester(source: Source): Reading<Tester> {
  return readAssumptions(source, 'tester file', TESTER_FIELDS, testerContradictions)
}

/** Returns what does not fit together in a tester, key by key; empty where all does. */
export function testerContradictions(tester: Tester): readonly Contradiction<Tester>[] {
  if (tester.scanMemory === null || tester.vectorMemory !== null) return []
  return [
    {
      key: 'scanMemory',
      message: '"scanMemory" is given, "vectorMemory" is not',
      hint: 'Give the depth of both memories, or "vectorMemory" alone where scan data sit in it',
    },
  ]
}

export function captureMHzOf(tester: Tester): number {
  return tester.captureMHz ?? tester.shiftMHz
}

export function vectorMHzOf(tester: Tester): number {
  return tester.vectorMHz ?? tester.shiftMHz
}
