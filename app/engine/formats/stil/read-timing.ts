import { quoted } from '../../source/finding-list.ts'
import { Token, type Lexer } from './lexer.ts'
import { readName } from './signal-names.ts'
import type { StilFindings } from './stil-findings.ts'
import type { Place, Waveform, WaveformEvent, WaveformTable } from './stil-file.ts'

const COLON = 58
const SEMICOLON = 59
const SLASH = 47
const OPEN = 123
const CLOSE = 125

/** Long names of events and their one-letter forms (IEEE 1450-1999, clause 18.2); those that mean the same share a letter. */
const EVENTS: Readonly<Record<string, string>> = {
  ForceDown: 'D',
  ForceUp: 'U',
  ForceOff: 'Z',
  ForcePrior: 'P',
  ForceUnknown: 'N',
  CompareLow: 'L',
  CompareHigh: 'H',
  CompareUnknown: 'X',
  CompareOff: 'T',
  CompareValid: 'V',
  CompareLowWindow: 'l',
  CompareHighWindow: 'h',
  CompareUnknownWindow: 'x',
  CompareOffWindow: 't',
  CompareValidWindow: 'v',
  ExpectLow: 'R',
  ExpectHigh: 'G',
  ExpectOff: 'Q',
  LogicLow: 'A',
  LogicHigh: 'B',
  LogicZ: 'F',
  Unknown: '?',
  Marker: 'M',
}

const LETTERS = new Set('DUZPNLHXTVlhxtvRGQABF?M')

/**
 * Reads one WaveformTable after its keyword (IEEE 1450-1999, clause 18):
 *
 *     table    = name "{" [ "Period" time ";" ] [ "InheritWaveformTable" name ";" ] [ "Waveforms" "{" { waveform } "}" ] "}"
 *     waveform = signals "{" { characters "{" { [ label ":" ] [ time ] event { "/" event } ";" } "}" } "}"
 *
 */
export function readTable(lexer: Lexer, findings: StilFindings): WaveformTable {
  const { source } = lexer
  const place = { source, span: lexer.span }
  const name = readName(lexer, 'the name of the waveform table')
  const inherits: string[] = []
  const waveforms: Waveform[] = []
  let period = ''
  body(() => {
    if (!lexer.isKind(Token.Word)) lexer.unexpected('Period or Waveforms')
    const word = lexer.value
    const { span } = lexer
    lexer.next()
    if (word === 'Waveforms') return body(readWaveform)
    if (word === 'Period') {
      if (!lexer.isKind(Token.Expression)) lexer.unexpected("a time in apostrophes, such as '100ns'")
      period = lexer.value
      lexer.next()
    } else if (word === 'InheritWaveformTable') {
      inherits.push(readName(lexer, 'the name of a waveform table'))
    } else if (word === 'SubWaveforms') {
      findings.caution(
        'unsupported-construct',
        source,
        span,
        word,
        'SubWaveforms are not supported; waveforms that use them are taken as unknown',
      )
    }
    skip()
  })
  return { name, place, inherits, period, waveforms }

  function readWaveform(): void {
    const start = lexer.start
    let reference: Place = { source, span: lexer.span }
    if (lexer.isKind(Token.Expression)) lexer.next()
    else {
      readName(lexer, 'the name of a signal or group')
      reference = { source, span: { start, end: lexer.lastEnd } }
    }
    const entries: Waveform['entries'][number][] = []
    body(() => {
      const entry = { source, span: lexer.span }
      if (!lexer.isKind(Token.Word)) lexer.unexpected('waveform characters')
      const characters = lexer.value
      lexer.next()
      if (characters.startsWith('Inherit')) return skip()
      const events: WaveformEvent[] = []
      body(() => events.push(readEvent()))
      for (const { actions } of events) {
        if (actions.length !== 1 && actions.length !== characters.length) {
          findings.fail(
            'width-mismatch',
            source,
            entry.span,
            `${quoted(characters)} has ${characters.length} characters and an event with ${actions.length}; expected one event for all, or one for each`,
          )
        }
      }
      entries.push({ characters, events, place: entry })
    })
    waveforms.push({ reference, entries })
  }

  function readEvent(): WaveformEvent {
    let time = ''
    if ((lexer.isKind(Token.Word) || lexer.isKind(Token.Quoted)) && lexer.peek() === COLON) {
      lexer.next()
      lexer.next()
    }
    if (lexer.isKind(Token.Expression)) {
      time = lexer.value
      lexer.next()
    }
    const actions: string[] = []
    while (!lexer.isKind(SEMICOLON) && !lexer.isKind(CLOSE)) {
      if (!lexer.isKind(Token.Word)) lexer.unexpected('an event such as U, D, Z, H, L or X')
      const word = lexer.value
      const action = EVENTS[word] ?? (LETTERS.has(word) ? word : null)
      if (action === null) lexer.unexpected('an event such as U, D, Z, H, L or X')
      actions.push(action)
      lexer.next()
      if (lexer.isKind(SLASH)) lexer.next()
    }
    if (lexer.isKind(SEMICOLON)) lexer.next()
    return { time, actions: actions.length === 0 ? ['?'] : actions }
  }

  function body(read: () => void): void {
    lexer.expect(OPEN, '"{"')
    while (!lexer.isKind(CLOSE)) {
      if (lexer.isKind(Token.End)) lexer.unexpected('"}"')
      if (lexer.isKind(SEMICOLON) || lexer.isKind(Token.Annotation)) lexer.next()
      else read()
    }
    lexer.next()
  }

  function skip(): void {
    while (!lexer.isKind(SEMICOLON) && !lexer.isKind(CLOSE) && !lexer.isKind(Token.End)) {
      if (lexer.isKind(OPEN)) {
        lexer.skipBraces()
        lexer.next()
        return
      }
      lexer.next()
    }
    if (lexer.isKind(SEMICOLON)) lexer.next()
  }
}
