import { describe, expect, test } from 'vitest'
import { linearScale, thinned, ticksOf } from '../../app/report/charts/scale.ts'
import { csvRow } from '../../app/report/csv-row.ts'
import { escapeMarkup, printable } from '../../app/report/printable.ts'
import { superscripts } from '../../app/report/superscripts.ts'

// Source: RFC 4180, section 2: fields with commas, quotes or line breaks stand in quotes, quotes are doubled.
test('a CSV row quotes what needs it and ends with CR LF', () => {
  expect(csvRow(['a', 'b,c', 'say "so"', 'two\nlines', 1.5, null])).toBe(
    'a,"b,c","say ""so""","two\nlines",1.5,\r\n',
  )
})

test('a CSV row guards texts that look like formulas, not numbers', () => {
  expect(csvRow(['=1+1', '+a', '-b', '@c', '\td', -5])).toBe("'=1+1,'+a,'-b,'@c,'\td,-5\r\n")
})

describe('texts from outside', () => {
  test('lose what can’t be printed, not what can', () => {
    expect(printable('a\u0000b\u202ec\ud800d\n')).toBe('a·b·c·d·')
    expect(printable('Größe 名 🙂')).toBe('Größe 名 🙂')
  })

  test('become plain text in markup', () => {
    expect(escapeMarkup(`<a href="x">'&`)).toBe('&#60;a href=&#34;x&#34;&#62;&#39;&#38;')
  })
})

test('exponents are raised, and nothing else', () => {
  const raised = (text: string) =>
    superscripts(text)
      .map((run) => (run.isRaised ? `[${run.text}]` : run.text))
      .join('')
  expect(raised('1 − Y^(1−T), e^(−(n0−1)T) and Y^T; a ^ b')).toBe('1 − Y[1−T], e[−(n0−1)T] and Y[T]; a ^ b')
})

describe('scales', () => {
  test('have ticks at 1, 2 or 5 times a power of ten', () => {
    expect(ticksOf(linearScale(0, 1024, 0, 1), 7)).toEqual([0, 200, 400, 600, 800, 1000])
    expect(ticksOf(linearScale(0.955, 0.9945, 0, 1), 5)).toEqual([0.96, 0.97, 0.98, 0.99])
    expect(ticksOf(linearScale(3, 3, 0, 1), 5)).toEqual([3])
  })

  test('thin a long curve without losing its extremes', () => {
    const values = Float64Array.from({ length: 10_001 }, (_, k) => (k === 5003 ? 9 : 1))
    const points = thinned(values, 0, 10_000, 100)
    expect(points.length).toBeLessThan(310)
    expect(points).toContainEqual([5003, 9])
    expect(points.at(-1)).toEqual([10_000, 1])
  })
})
