import type { Diagnostic } from '../engine/source/diagnostic.ts'
import { formatDiagnostic, placeDiagnostics } from '../engine/source/caret-frame.ts'
import type { FileWork } from '../services/on-files/file-work.ts'
import type { Io } from './io.ts'
import { plainSpaces } from './print-text.ts'

/** How many warnings of one reading are shown; errors are shown all. */
const WARNINGS_SHOWN = 10
const PROGRESS_MILLISECONDS = 100
const CLEAR_LINE = '\r\u001b[K'
const RED = 31
const YELLOW = 33

/** Standard error: findings in full, and where it is a terminal, one line that tells how far the work is. */
export type Terminal = FileWork & {
  /** Warnings so far. */
  readonly warnings: number
  say(text: string): void
  warn(text: string): void
  fail(text: string, hint?: string | null): void
  /** Takes the line of progress away. */
  clear(): void
}

export function openTerminal({ stderr, stdin, env, signal, isInterrupted }: Io): Terminal {
  const isTerminal = stderr.isTTY === true
  const isColoured = isTerminal && !env['NO_COLOR'] && env['TERM'] !== 'dumb'
  const paint = (text: string, colour: number): string =>
    isColoured ? `\u001b[${colour}m${text}\u001b[0m` : text
  let warnings = 0
  let isProgressShown = false
  let shownAt = 0

  const clear = (): void => {
    if (isProgressShown) stderr.write(CLEAR_LINE)
    isProgressShown = false
  }
  const say = (text: string): void => {
    clear()
    stderr.write(`${plainSpaces(text)}\n`)
  }
  const show = (diagnostic: Diagnostic, text: string): void => {
    const colour = diagnostic.severity === 'error' ? RED : YELLOW
    say(text.replace(` - ${diagnostic.severity}: `, ` - ${paint(diagnostic.severity, colour)}: `))
  }
  return {
    signal,
    isCancelled: isInterrupted,
    stdin,
    get warnings() {
      return warnings
    },
    clear,
    say,
    warn(text) {
      warnings++
      say(`${paint('warning', YELLOW)}: ${text}`)
    },
    fail(text, hint = null) {
      say(`${paint('error', RED)}: ${text}${hint === null ? '' : `\n  ${hint}`}`)
    },
    report({ phase, share }) {
      if (!isTerminal) return
      const now = performance.now()
      if (isProgressShown && now - shownAt < PROGRESS_MILLISECONDS) return
      shownAt = now
      isProgressShown = true
      stderr.write(`${CLEAR_LINE}${phase}${share === null ? ' …' : ` ${Math.floor(share * 100)} %`}`)
    },
    tell(diagnostics, sources) {
      const errors = diagnostics.filter(({ severity }) => severity === 'error')
      const others = diagnostics.filter(({ severity }) => severity !== 'error')
      const shown = [...others.slice(0, WARNINGS_SHOWN), ...errors]
      const placed = placeDiagnostics(shown, sources)
      shown.forEach((diagnostic, at) => {
        const one = placed[at]
        if (one !== undefined) show(diagnostic, formatDiagnostic(one))
      })
      warnings += others.length
      const hidden = others.length - WARNINGS_SHOWN
      if (hidden > 0) say(`… and ${hidden} more warning${hidden === 1 ? '' : 's'}`)
    },
  }
}
