import { quoted } from '../../source/finding-list.ts'
import type { Lexer } from './lexer.ts'
import type { StilFindings } from './stil-findings.ts'

const SEMICOLON = 59
const BACKSLASH = 92

/** The longest data that repeats may expand to. */
const MAX_DATA = 1 << 24
const MAX_DIGITS = 1 << 16

type Radix = 'waveform' | 'hexadecimal' | 'decimal'

/**
 * Returns vector data with everything expanded, from a lexer whose first data run was just taken and ended at `stop`
 * (IEEE 1450-1999, clause 21.1):
 *
 *     data = { run | "\r" count run | "\w" | "\h" [characters] digits | "\d" [characters] digits | "\l" length }
 *
 * A repeat holds for the run after it. Hexadecimal and decimal digits become bits, and bits the waveform characters that
 * follow the letter, or the group's base, or 0 and 1. `\l` gives the number of characters; without it a number has its
 * digits' bits, less zeros at the front down to the signals' width.
 */
export function expandData(
  lexer: Lexer,
  stop: number,
  findings: StilFindings,
  target: { width: () => number; base: () => string },
): string {
  const pieces: string[] = []
  let length = 0
  let radix: Radix = 'waveform'
  let characters = ''
  let repeat = 1
  let wanted = -1
  const from = lexer.start
  const add = (run: string): void => {
    if (run.length === 0) return
    const piece = radix === 'waveform' ? run : bits(run)
    length += piece.length * repeat
    if (length > MAX_DATA) {
      findings.fail('limit', lexer.source, lexer.span, `data of more than ${MAX_DATA} waveform characters`)
    }
    pieces.push(repeat === 1 ? piece : piece.repeat(repeat))
    repeat = 1
    wanted = -1
  }

  add(lexer.text.slice(lexer.start, lexer.end))
  while (stop === BACKSLASH || isRun(stop)) {
    if (stop === BACKSLASH) {
      const start = lexer.end
      lexer.readSign()
      const letter = String.fromCharCode(lexer.readSign())
      stop = lexer.readDataRun(true)
      const argument = lexer.text.slice(lexer.start, lexer.end)
      if (letter === 'r' || letter === 'l') {
        if (!/^\d{1,9}$/.test(argument)) {
          broken(start, `expected a number after "\\${letter}", found ${quoted(argument)}`)
        }
        if (letter === 'r') repeat = Number(argument)
        else wanted = Number(argument)
      } else if (letter === 'h' || letter === 'd') {
        radix = letter === 'h' ? 'hexadecimal' : 'decimal'
        characters = argument
      } else if (letter === 'w') {
        radix = 'waveform'
        add(argument)
      } else {
        findings.fail(
          'unsupported-construct',
          lexer.source,
          { start, end: start + 2 },
          `"\\${letter}" in vector data is not supported; expected \\r, \\w, \\h, \\d or \\l`,
        )
      }
    } else {
      stop = lexer.readDataRun()
      add(lexer.text.slice(lexer.start, lexer.end))
    }
  }
  if (stop !== SEMICOLON && length === 0) broken(from, 'expected waveform characters')
  return pieces.length === 1 ? (pieces[0] ?? '') : pieces.join('')

  function broken(start: number, message: string): never {
    findings.fail('syntax', lexer.source, { start, end: Math.max(start + 1, lexer.end) }, message)
  }

  function bits(digits: string): string {
    const mapping = characters || target.base() || '01'
    const bitsEach = Math.log2(mapping.length)
    if (!Number.isInteger(bitsEach) || bitsEach < 1) {
      broken(
        lexer.start,
        `expected 2, 4, 8 or 16 waveform characters to stand for digits, found ${quoted(mapping)}`,
      )
    }
    if (!(radix === 'hexadecimal' ? /^[0-9a-fA-F]+$/ : /^[0-9]+$/).test(digits)) {
      broken(lexer.start, `expected ${radix} digits, found ${quoted(digits)}`)
    }
    if (digits.length > MAX_DIGITS) broken(lexer.start, `a number of more than ${MAX_DIGITS} digits`)
    const written = radix === 'hexadecimal' ? digits.length * 4 : null
    let binary = BigInt(radix === 'hexadecimal' ? `0x${digits}` : digits).toString(2)
    if (written !== null) binary = binary.padStart(written, '0')
    const width = wanted >= 0 ? wanted : target.width()
    const places = width * bitsEach
    if (places > MAX_DATA) broken(lexer.start, `data of more than ${MAX_DATA} waveform characters`)
    if (wanted >= 0 || radix === 'decimal') binary = binary.padStart(places, '0')
    const extra = binary.length - Math.max(places, 1)
    if (extra > 0 && width > 1 && /^0*$/.test(binary.slice(0, extra))) binary = binary.slice(extra)
    if (bitsEach === 1) return binary.replace(/[01]/g, (bit) => mapping[Number(bit)] ?? '')
    const whole = binary.padStart(Math.ceil(binary.length / bitsEach) * bitsEach, '0')
    let run = ''
    for (let at = 0; at < whole.length; at += bitsEach) {
      run += mapping[Number.parseInt(whole.slice(at, at + bitsEach), 2)] ?? ''
    }
    return run
  }
}

function isRun(code: number): boolean {
  return code > 32 && code < 128 && code !== SEMICOLON && /[\w.$#%?]/.test(String.fromCharCode(code))
}
