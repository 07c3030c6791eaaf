import type { Command } from './command.ts'
import type { Io } from './io.ts'

/** A command in the list: what it does, in a line, and how it is loaded once it is asked for. */
export type CommandEntry = {
  readonly summary: string
  readonly load: () => Promise<Command>
}

/** A command that reads its own arguments and has no help of its own. */
export type PlainEntry = {
  readonly summary: string
  readonly loadPlain: () => Promise<(args: readonly string[], io: Io) => Promise<number>>
}

export const COMMANDS: Readonly<Record<string, CommandEntry | PlainEntry>> = {
  circuit: {
    summary: 'reads a netlist; counts its gates, lines and faults',
    load: async () => (await import('./circuit.ts')).circuit,
  },
  coverage: {
    summary: 'simulates patterns; fault coverage and its curve',
    load: async () => (await import('./coverage.ts')).coverage,
  },
  plan: {
    summary: 'orders and cuts the set under limits or for a goal, and prices the cut',
    load: async () => (await import('./plan.ts')).plan,
  },
  compare: {
    summary: 'what one pattern set detects and another does not, at equal time and at equal coverage',
    load: async () => (await import('./compare.ts')).compare,
  },
  demo: {
    summary: 'builds the demo project and a report of each of its products in a folder',
    load: async () => (await import('./demo.ts')).demo,
  },
  serve: {
    summary: 'the application on loopback, in a browser',
    loadPlain: async () => (await import('./serve.ts')).serve,
  },
}
