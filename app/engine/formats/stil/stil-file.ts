import type { Source, Span } from '../../source/source.ts'
import type { Statement } from './statement.ts'

/** What the blocks of a STIL file declare, and those of the files that it includes; the patterns are left as places in the text. */
export type StilFile = {
  readonly signals: SignalTable
  /** Groups by domain, '' for those without one. */
  readonly groups: Map<string, Map<string, SignalGroup>>
  readonly timings: Map<string, Timing>
  /** Values of spec variables in seconds, the first category that gives one. */
  readonly specs: Map<string, string>
  readonly chains: DeclaredChain[]
  readonly bursts: Map<string, Burst>
  readonly execs: Exec[]
  /** Procedures and macros by domain, '' for those without one. */
  readonly procedures: Map<string, Map<string, Procedure>>
  readonly macros: Map<string, Map<string, Procedure>>
  readonly patterns: Map<string, PatternBlock>
}

export type Direction = 'In' | 'Out' | 'InOut' | 'Supply' | 'Pseudo'

/** Signals in the order of their declaration, busses bit by bit. Columns grow together. */
export type SignalTable = {
  readonly names: string[]
  readonly index: Map<string, number>
  readonly direction: Direction[]
  /** 1 scan-in, 2 scan-out, as the signal or a group of it says; 0 neither. */
  readonly scan: number[]
  /** The state at the start: 'U', 'D', 'Z' or ''. */
  readonly initial: string[]
}

/** A place in one of the sources. */
export type Place = { readonly source: Source; readonly span: Span }

export type SignalGroup = {
  readonly name: string
  readonly expression: Place
  readonly domain: string
  /** Two waveform characters or more that hexadecimal and decimal data stand for; '' where not declared. */
  readonly base: string
  readonly scan: number
  /** Signal indices, once asked for; null before. */
  members: Int32Array | null
  resolving: boolean
}

export type Timing = {
  readonly domain: string
  readonly tables: Map<string, WaveformTable>
}

export type WaveformTable = {
  readonly name: string
  readonly place: Place
  readonly inherits: readonly string[]
  /** The text of the period's expression; '' where none is given. */
  readonly period: string
  readonly waveforms: readonly Waveform[]
}

export type Waveform = {
  readonly reference: Place
  /** One entry for each list of waveform characters. */
  readonly entries: readonly {
    readonly characters: string
    readonly events: readonly WaveformEvent[]
    readonly place: Place
  }[]
}

export type WaveformEvent = {
  /** The text of the time's expression; '' where none is given. */
  readonly time: string
  /** One code for all characters of the list, or one for each. */
  readonly actions: readonly string[]
}

export type DeclaredChain = {
  readonly name: string
  readonly place: Place
  readonly length: number | null
  readonly scanIn: string
  readonly scanOut: string
  /** Whether a bit passes the whole chain inverted; null where not declared. */
  readonly inversion: boolean | null
  readonly cells: readonly DeclaredCell[]
}

export type DeclaredCell = {
  readonly name: string
  /** True where an inversion stands between the cell before, or scan-in, and this one. */
  readonly invertedBefore: boolean
}

export type Burst = {
  readonly name: string
  readonly place: Place
  readonly entries: readonly { readonly name: string; readonly place: Place }[]
  readonly domains: { readonly groups: string; readonly procedures: string; readonly macros: string }
}

export type Exec = {
  readonly name: string
  readonly place: Place
  readonly timing: string
  readonly burst: { readonly name: string; readonly place: Place } | null
}

export type Procedure = {
  readonly name: string
  readonly place: Place
  readonly body: readonly Statement[]
  readonly hasShift: boolean
}

export type PatternBlock = {
  readonly name: string
  readonly source: Source
  /** The text between the block's braces. */
  readonly start: number
  readonly end: number
}

export function emptyStilFile(): StilFile {
  return {
    signals: { names: [], index: new Map(), direction: [], scan: [], initial: [] },
    groups: new Map(),
    timings: new Map(),
    specs: new Map(),
    chains: [],
    bursts: new Map(),
    execs: [],
    procedures: new Map(),
    macros: new Map(),
    patterns: new Map(),
  }
}
