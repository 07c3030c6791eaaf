import { describe, expect, test } from 'vitest'
import { type Keys, readJsonObject } from '../../../../app/engine/formats/json/read-json.ts'
import { buildLineIndex } from '../../../../app/engine/source/line-index.ts'

const LAMP = {
  name: { kind: 'text' },
  watts: { kind: 'number', above: 0, max: 100 },
  sockets: { kind: 'number', min: 1, whole: true },
  colour: { kind: 'text', oneOf: ['warm', 'cold'] },
  dimmable: { kind: 'boolean' },
  reloadMs: { kind: 'or-null', of: { kind: 'number', min: 0 } },
  pairs: { kind: 'list', of: { kind: 'list', of: { kind: 'number' }, minItems: 2, maxItems: 2 } },
  rooms: {
    kind: 'list',
    of: { kind: 'either', of: [{ kind: 'number', min: 1, whole: true }, { kind: 'text' }] },
  },
  shade: { kind: 'object', keys: { size: { kind: 'number' }, cloth: { kind: 'text' } }, required: ['size'] },
} as const satisfies Keys

const read = (text: string) => readJsonObject({ name: 'lamp.json', text }, 'lamp file', LAMP)

/** The first finding as `code at line:column: message / hint`. */
function finding(text: string): string {
  const [first] = read(text).diagnostics
  const { line, column } = buildLineIndex(text).placeOf(first.span.start)
  return `${first.code} at ${line}:${column}: ${first.message}${first.hint === undefined ? '' : ` / ${first.hint}`}`
}

describe('a JSON file that fits its shapes', () => {
  test('gives plain values, with keys that are missing left out', () => {
    const text = `{"name": "Desk\\n\\u00e9", "watts": 7.5e0, "reloadMs": null, "pairs": [[1, -2]], "rooms": [3, "4-6"], "shade": {"size": 2}}`
    expect(read(text).value?.values).toEqual({
      name: 'Desk\né',
      watts: 7.5,
      reloadMs: null,
      pairs: [[1, -2]],
      rooms: [3, '4-6'],
      shade: { size: 2 },
    })
  })

  test('says where each value stands', () => {
    const text = '\ufeff{\r\n  "pairs": [[1, 2],\r\n [3, 44]]}'
    const place = read(text).value?.spanOf('pairs', 1, 1)
    expect(text.slice(place?.start, place?.end)).toBe('44')
    expect(buildLineIndex(text).placeOf(place?.start ?? 0)).toEqual({ line: 3, column: 6 })
  })

  test('may be empty', () => {
    expect(read(' {} ').value?.values).toEqual({})
  })
})

describe('a JSON file that does not fit', () => {
  test.each([
    ['{"wats": 5}', `unknown-name at 1:2: the lamp file has no "wats" / Did you mean "watts"?`],
    [
      '{"__proto__": 5}',
      `unknown-name at 1:2: the lamp file has no "__proto__" / The names known here: ${Object.keys(LAMP).join(', ')}`,
    ],
    ['{"watts": 0}', 'out-of-range at 1:11: "watts" is 0; a number above 0 and up to 100 is expected'],
    ['{"sockets": 1.5}', 'out-of-range at 1:13: "sockets" is 1.5; a whole number of 1 or more is expected'],
    [
      '{"watts": "7"}',
      'wrong-type at 1:11: "watts" is the text "7"; a number above 0 and up to 100 is expected',
    ],
    ['{"watts": null}', 'wrong-type at 1:11: "watts" is null; a number above 0 and up to 100 is expected'],
    [
      '{"colour": "warn"}',
      'unknown-name at 1:12: "colour" is "warn"; "warm" or "cold" is expected / Did you mean "warm"?',
    ],
    ['{"pairs": [[1]]}', 'out-of-range at 1:12: value 1 of "pairs" has 1 values; a list of 2 is expected'],
    [
      '{"reloadMs": true}',
      'wrong-type at 1:14: "reloadMs" is true; a number of 0 or more, or null, is expected',
    ],
    [
      '{"rooms": [{}]}',
      'wrong-type at 1:12: value 1 of "rooms" is an object; a whole number of 1 or more or a text in quotation marks is expected',
    ],
    [
      '{"name": "a",\n "name": "b"}',
      'duplicate-declaration at 2:2: "name" is given twice / Remove one of them',
    ],
    ['{"shade": {"cloth": "silk"}}', 'missing-name at 1:11: "shade" lacks "size"'],
    [
      '[1]',
      'wrong-type at 1:1: the lamp file is a list; an object with ' +
        Object.keys(LAMP).join(', ') +
        ' is expected',
    ],
  ])('%s', (text, expected) => {
    expect(finding(text)).toBe(expected)
  })

  test('names every misfit, up to a limit that is said', () => {
    expect(read('{"watts": -1, "sockets": 0, "x": 1}').diagnostics.map(({ code }) => code)).toEqual([
      'out-of-range',
      'out-of-range',
      'unknown-name',
    ])
    const many = read(`{"rooms": [${'0, '.repeat(80)}0]}`)
    expect(many.value).toBeNull()
    expect(many.diagnostics).toHaveLength(51)
    expect(many.diagnostics[50].code).toBe('too-many')
  })
})

describe('text that is not JSON', () => {
  test.each([
    ['', 'empty-file at 1:1: the file is empty; a JSON object is expected / Write at least {}'],
    [
      '{"watts": 7,}',
      'syntax at 1:13: found `}` where a name in double quotation marks is expected / Remove the comma before it, or add what is missing',
    ],
    [
      '{\n  watts: 7}',
      'syntax at 2:3: found `watts` where a name in double quotation marks is expected / Put names and texts in double quotation marks',
    ],
    [
      `{"name": 'a'}`,
      'syntax at 1:10: found `\'` where the value of "name" is expected / Texts and names stand in straight double quotation marks',
    ],
    [
      '{"watts": 07}',
      'syntax at 1:11: found `07` where the value of "watts" is expected / Write numbers as 12, 0.5 or 1e6: no plus sign, no leading zero, a digit before the point',
    ],
    [
      '{"watts": NaN}',
      'syntax at 1:11: found `NaN` where the value of "watts" is expected / JSON has finite numbers only',
    ],
    ['{"watts": 1e999}', 'syntax at 1:11: the number `1e999` is too large'],
    [
      '{"watts": 7 // power\n}',
      'syntax at 1:13: found `/` where a comma or a closing } is expected / JSON has no comments: remove it',
    ],
    [
      '{"watts": 7',
      'truncated at 1:12: the file ends where a comma or a closing } is expected / The file may be cut off: look for a bracket or a quotation mark that is not closed',
    ],
    [
      '{"name": "a\n"}',
      'truncated at 1:10: the quotation mark is not closed on its line / Add the closing "',
    ],
    ['{"name": "\\x"}', 'syntax at 1:11: found `\\x`, which is no escape / A backslash is written \\\\'],
    ['{} {}', 'syntax at 1:4: found `{` where the end of the file is expected'],
    ['{"name": \0}', 'syntax at 1:10: found the character U+0000 where the value of "name" is expected'],
  ])('%j', (text, expected) => {
    expect(finding(text)).toBe(expected)
  })

  test('may nest only so deep', () => {
    expect(finding('['.repeat(100_000))).toBe('limit at 1:65: brackets are nested deeper than 64')
  })

  // Source: ECMA-404 as implemented by the JavaScript engine's own JSON.parse.
  test('is refused exactly where the language refuses it', () => {
    const texts = [
      '{"a":1}',
      '{"a":-0.0e-1}',
      '{"a":1.}',
      '{"a":.5}',
      '{"a":-}',
      '{"a":tru}',
      '{"a":"\\ud83d\\ude00"}',
      '{"a":[1,,2]}',
    ]
    texts.push(
      '{"a":"\t"}',
      '\u00a0{}',
      '{"a":01}',
      '{"a":1 2}',
      '{"a":falsey}',
      '{"":0}',
      '{"a":"\\u12"}',
      '{]',
      '{"a":{}}',
    )
    const isJson = (text: string): boolean => {
      try {
        JSON.parse(text)
        return true
      } catch {
        return false
      }
    }
    const isSyntax = (text: string): boolean =>
      read(text).diagnostics.some(({ code }) => code === 'syntax' || code === 'truncated')
    expect(texts.filter((text) => isSyntax(text) === isJson(text))).toEqual([])
  })
})
