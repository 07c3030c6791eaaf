import type { Readable, Writable } from 'node:stream'

/** What the command line gets from whoever runs it. */
export type Io = {
  /** The URL of the script that runs, by which the installation's parts are found. */
  readonly entryUrl: string
  readonly stdin: Readable
  readonly stdout: Writable & { readonly isTTY?: boolean }
  readonly stderr: Writable & { readonly isTTY?: boolean }
  readonly env: Readonly<Record<string, string | undefined>>
  /** Aborted when the user interrupts; what is under way then ends without a trace. */
  readonly signal: AbortSignal
  /** The same for a loop that hears no events. */
  readonly isInterrupted: () => boolean
}
