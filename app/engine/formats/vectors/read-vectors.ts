import { patternWidth, responseWidth, type Circuit } from '../../circuit/circuit.ts'
import { PatternSetBuilder } from '../../simulate/pattern-set-builder.ts'
import type { PatternSet } from '../../simulate/pattern-set.ts'
import {
  MAX_DIAGNOSTICS,
  type Diagnostic,
  type DiagnosticCode,
  type Reading,
} from '../../source/diagnostic.ts'
import type { ReadingProgress } from '../../source/reading-progress.ts'
import type { Source } from '../../source/source.ts'

const MAX_CYCLES = 0xffffffff
const PROGRESS_STEP = 4_000_000
/** Patterns in a word of a plane. */
const BLOCK_LINES = 32

const NEWLINE = 10
const RETURN = 13
const SPACE = 32
const TAB = 9
const HASH = 35
const ZERO = 48
const ONE = 49
const NINE = 57
const AT = 64
const BIG_X = 88
const SMALL_X = 120
const BIG_L = 76
const SMALL_L = 108
const BIG_H = 72
const SMALL_H = 104

/**
 * Reads the plain vectors file, one pattern a line:
 *
 *     pattern = inputs [ outputs ] [ "@" cycles ]        parts separated by blanks
 *     inputs  = one of 0 1 X for each primary input, then for each flip-flop, in the netlist's order
 *     outputs = one of L H X for each primary output, then for each flip-flop's data; an X is not observed
 *     comment = "#" to the end of the line
 *
 * A width that does not fit and a character that is none of these are reported with their place; reading goes on with
 * the next line. Errors: empty-file, no-patterns, pattern-width, unknown-character, syntax, out-of-range.
 */
export function readVectors(
  source: Source,
  circuit: Circuit,
  options: { onProgress?: ReadingProgress } = {},
): Reading<PatternSet> {
  return new VectorsReader(source, circuit, options.onProgress).read()
}

class VectorsReader {
  private readonly text: string
  private readonly circuit: Circuit
  private readonly width: number
  private readonly responses: number
  private readonly builder: PatternSetBuilder
  private readonly diagnostics: Diagnostic[] = []
  private readonly file: string
  private readonly onProgress: ReadingProgress | undefined
  private at = 0

  constructor(source: Source, circuit: Circuit, onProgress: ReadingProgress | undefined) {
    this.text = source.text
    this.file = source.name
    this.circuit = circuit
    this.width = patternWidth(circuit)
    this.responses = responseWidth(circuit)
    this.onProgress = onProgress
    const shortest = this.width + 1
    this.builder = new PatternSetBuilder(
      this.width,
      this.responses,
      Math.ceil((source.text.length + 1) / shortest),
    )
  }

  read(): Reading<PatternSet> {
    const { text } = this
    let nextProgress = PROGRESS_STEP
    while (this.at < text.length) {
      if (this.at >= nextProgress) {
        nextProgress = this.at + PROGRESS_STEP
        if (this.onProgress?.(this.at, text.length) === false) return this.result(null)
      }
      this.skipBlanks()
      const code = text.charCodeAt(this.at)
      if (code === NEWLINE || code === RETURN) this.at++
      else if (code === HASH) this.skipLine()
      else if (this.at < text.length && !this.readPlainBlock() && !this.readPattern()) {
        this.skipLine()
        this.builder.endPattern()
      }
      if (this.diagnostics.length >= MAX_DIAGNOSTICS) {
        this.report('too-many', this.at, this.at, `${MAX_DIAGNOSTICS} errors found; reading stopped here`)
        return this.result(null)
      }
    }
    if (this.diagnostics.length > 0) return this.result(null)
    if (this.builder.nPatterns === 0) {
      const code = text.trim().length === 0 ? 'empty-file' : 'no-patterns'
      this.report(
        code,
        0,
        0,
        'the file has no pattern',
        `Expected a line of ${this.width} characters 0, 1 or X for each pattern.`,
      )
      return this.result(null)
    }
    return this.result(this.builder.finish(this.file))
  }

  /**
   * 32 lines at once that hold nothing but input characters, all of the right width; false where they are not such, or the
   * patterns so far do not fill whole words. Bits that it has written by then are written again by the lines one by one.
   */
  private readPlainBlock(): boolean {
    const { text, builder, width, at } = this
    if (builder.nPatterns % BLOCK_LINES !== 0) return false
    const stride = text.charCodeAt(at + width) === RETURN ? width + 2 : width + 1
    const end = at + BLOCK_LINES * stride
    if (end > text.length) return false
    for (let lineEnd = at + width; lineEnd < end; lineEnd += stride) {
      if (stride === width + 2 && text.charCodeAt(lineEnd) !== RETURN) return false
      if (text.charCodeAt(lineEnd + stride - width - 1) !== NEWLINE) return false
    }
    for (let row = 0; row < width; row++) {
      let ones = 0
      let odd = 0
      for (let line = 0, place = at + row; line < BLOCK_LINES; line++, place += stride) {
        const code = text.charCodeAt(place) ^ ZERO
        odd |= code
        ones |= code << line
      }
      if (odd <= 1) builder.setInputs(row, ones, 0)
      else if (!this.readPlainColumn(row, stride)) return false
    }
    builder.endPatterns(BLOCK_LINES)
    this.at = end
    return true
  }

  /** One input's character in 32 lines, some of them X; false where one is neither 0, 1 nor X. */
  private readPlainColumn(row: number, stride: number): boolean {
    const { text, builder, at } = this
    let ones = 0
    let unknown = 0
    for (let line = 0, place = at + row; line < BLOCK_LINES; line++, place += stride) {
      const code = text.charCodeAt(place)
      if (code === ONE) ones |= 1 << line
      else if (code === BIG_X || code === SMALL_X) unknown |= 1 << line
      else if (code !== ZERO) return false
    }
    builder.setInputs(row, ones, unknown)
    return true
  }

  /** One line; false where it is broken and its rest is to be skipped. */
  private readPattern(): boolean {
    if (!this.readInputs()) return false
    this.skipBlanks()
    let code = this.text.charCodeAt(this.at)
    if (!isEnd(code) && code !== AT && code !== HASH) {
      if (!this.readOutputs()) return false
      this.skipBlanks()
      code = this.text.charCodeAt(this.at)
    }
    if (code === AT) {
      if (!this.readCycles()) return false
      this.skipBlanks()
      code = this.text.charCodeAt(this.at)
    }
    if (code === HASH) this.skipLine()
    else if (!isEnd(code)) {
      return this.unexpected(`expected the end of pattern ${this.number()}, "@cycles" or a comment`)
    }
    this.builder.endPattern()
    return true
  }

  private readInputs(): boolean {
    const { text, builder, width } = this
    const start = this.at
    let row = 0
    for (; this.at < text.length; this.at++, row++) {
      const code = text.charCodeAt(this.at)
      if (code <= SPACE || code === HASH || code === AT) break
      if (row >= width) continue
      if (code === ONE) builder.setInput(row, 1)
      else if (code === BIG_X || code === SMALL_X) builder.setInput(row, 'X')
      else if (code !== ZERO) return this.unexpected('expected 0, 1 or X for an input')
    }
    return row === width || this.wrongWidth(start, row, width, 'input')
  }

  private readOutputs(): boolean {
    const { text, builder, responses } = this
    const start = this.at
    let row = 0
    for (; this.at < text.length; this.at++, row++) {
      const code = text.charCodeAt(this.at)
      if (code <= SPACE || code === HASH || code === AT) break
      if (row >= responses) continue
      if (code === BIG_H || code === SMALL_H) builder.expect(row, 1)
      else if (code === BIG_L || code === SMALL_L) builder.expect(row, 0)
      else if (code === BIG_X || code === SMALL_X) builder.mask(row)
      else {
        return this.unexpected('expected L, H or X for an output')
      }
    }
    return row === responses || this.wrongWidth(start, row, responses, 'output')
  }

  private readCycles(): boolean {
    const start = ++this.at
    let cycles = 0
    for (; ; this.at++) {
      const code = this.text.charCodeAt(this.at)
      if (!(code >= ZERO && code <= NINE)) break
      cycles = Math.min(MAX_CYCLES + 1, 10 * cycles + code - ZERO)
    }
    if (this.at === start) return this.unexpected('expected the number of tester cycles after "@"')
    if (cycles === 0 || cycles > MAX_CYCLES) {
      this.report(
        'out-of-range',
        start,
        this.at,
        `cycles of pattern ${this.number()} must lie between 1 and ${MAX_CYCLES}`,
      )
      return false
    }
    this.builder.setCycles(cycles)
    return true
  }

  private wrongWidth(start: number, found: number, wanted: number, what: 'input' | 'output'): false {
    const { inputs, outputs, flipFlops, name } = this.circuit
    const ports = what === 'input' ? inputs.length : outputs.length
    const parts = `${ports} primary ${what}s and ${flipFlops.length} flip-flops`
    const hint =
      found === ports && flipFlops.length > 0
        ? `These are the primary ${what}s alone: add a character for each of the ${flipFlops.length} flip-flops.`
        : `Compare the netlist revision: the pattern set may belong to another one than "${name}".`
    this.report(
      'pattern-width',
      start,
      this.at,
      `pattern ${this.number()} has ${found} ${what} characters; "${name}" takes ${wanted} (${parts})`,
      hint,
    )
    return false
  }

  private number(): number {
    return this.builder.nPatterns + 1
  }

  private unexpected(expectation: string): false {
    const { at } = this
    const code = this.text.charCodeAt(at)
    const found =
      at >= this.text.length
        ? 'the end of the file'
        : isEnd(code)
          ? 'the end of the line'
          : `"${this.text[at]}"`
    this.report('unknown-character', at, Math.min(at + 1, this.text.length), `${expectation}, found ${found}`)
    return false
  }

  private report(code: DiagnosticCode, start: number, end: number, message: string, hint?: string): void {
    this.diagnostics.push({
      code,
      severity: 'error',
      file: this.file,
      span: { start, end },
      message,
      ...(hint ? { hint } : {}),
    })
  }

  private skipBlanks(): void {
    for (; ; this.at++) {
      const code = this.text.charCodeAt(this.at)
      if (code !== SPACE && code !== TAB && code !== 0xfeff) return
    }
  }

  private skipLine(): void {
    while (!isEnd(this.text.charCodeAt(this.at))) this.at++
  }

  private result(value: PatternSet | null): Reading<PatternSet> {
    return { value, diagnostics: this.diagnostics }
  }
}

/** True at a line end and past the text. */
function isEnd(code: number): boolean {
  return code === NEWLINE || code === RETURN || Number.isNaN(code)
}
