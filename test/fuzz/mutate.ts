const ODD_SIGNS = [
  '\0',
  '\ufeff',
  '\r',
  '\n',
  '\t',
  '"',
  "'",
  '{',
  '}',
  '(',
  ')',
  ';',
  '\\',
  '/*',
  '*/',
  '//',
  '`',
  '😀',
]
const ODD_NUMBERS = [
  '0',
  '-1',
  '1',
  '65536',
  '2147483648',
  '4294967296',
  '99999999999999999999',
  '1e999',
  '0.5',
]

/** The most characters that a mutated input may have, so that a case stays one of a small file. */
const MAX_LENGTH = 200_000

/**
 * Returns a text with one to eight changes: characters and pieces deleted, doubled, exchanged, moved in from another seed,
 * numbers and words replaced, brackets nested, the text cut off.
 */
export function mutate(seed: string, others: readonly string[], below: (n: number) => number): string {
  let text = seed
  for (let changes = 1 + below(8); changes > 0; changes--) {
    text = change(text, others, below)
    if (text.length > MAX_LENGTH) text = text.slice(0, MAX_LENGTH)
  }
  return text
}

function change(text: string, others: readonly string[], below: (n: number) => number): string {
  const at = below(text.length + 1)
  const length = 1 + below(below(4) === 0 ? 200 : 8)
  const splice = (insert: string, removed = 0): string =>
    text.slice(0, at) + insert + text.slice(at + removed)
  switch (below(12)) {
    case 0:
      return splice('', length)
    case 1:
      return splice(text.slice(at, at + length))
    case 2:
      return splice(String.fromCharCode(below(4) === 0 ? below(0xd800) : 32 + below(95)), 1)
    case 3:
      return splice(pick(ODD_SIGNS, below), below(2))
    case 4:
      return replaceNear(text, at, /\d+/g, pick(ODD_NUMBERS, below))
    case 5:
      return replaceNear(text, at, /[A-Za-z_]\w*/g, wordOf(text, below))
    case 6: {
      const other = pick(others, below)
      const from = below(other.length + 1)
      return splice(other.slice(from, from + length * 4), below(3) * length)
    }
    case 7:
      return text.slice(0, at)
    case 8: {
      const from = below(text.length + 1)
      return splice(text.slice(from, from + length * 4))
    }
    case 9: {
      const line = text.lastIndexOf('\n', at) + 1
      const end = text.indexOf('\n', at)
      const copy = text.slice(line, end < 0 ? text.length : end + 1)
      return text.slice(0, line) + copy.repeat(1 + below(50)) + text.slice(line)
    }
    case 10:
      return splice(pick(['(', '{', '[', "'", '/* ', '"'], below).repeat(1 + below(500)))
    default:
      return splice('a'.repeat(1 + below(below(20) === 0 ? 100_000 : 50)))
  }
}

function pick<T>(list: readonly T[], below: (n: number) => number): T {
  return list[below(list.length)]
}

function wordOf(text: string, below: (n: number) => number): string {
  const from = below(text.length + 1)
  return /[A-Za-z_]\w*/.exec(text.slice(from, from + 400))?.[0] ?? 'x'
}

/** Replaces the first match that starts at or after a place. */
function replaceNear(text: string, at: number, pattern: RegExp, insert: string): string {
  pattern.lastIndex = at
  const match = pattern.exec(text)
  return match === null
    ? text
    : text.slice(0, match.index) + insert + text.slice(match.index + match[0].length)
}
