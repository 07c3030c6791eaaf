import { inflateRawSync } from 'node:zlib'
import { describe, expect, test } from 'vitest'
import { DEFAULT_PRODUCT } from '../../app/engine/quality/product.ts'
import { DEFAULT_TESTER } from '../../app/engine/tester/tester.ts'
import { buildReport } from '../../app/report/build-report.ts'
import { csvReport } from '../../app/report/csv-report.ts'
import { htmlReport } from '../../app/report/html-report.ts'
import { pdfReport } from '../../app/report/pdf-report.ts'
import { ALL_SECTIONS } from '../../app/report/report-input.ts'
import { xlsxReport } from '../../app/report/xlsx-report.ts'
import { reportOfNand } from '../helpers/nand-report.ts'

const HOSTILE = '<script>alert(1)</script>"\'&\u202e=1+1\u0000'
const CAUTION = 'This plan is no safety case'

/** A report in which every text from outside tries to be markup. */
function hostileReport() {
  const product = { ...DEFAULT_PRODUCT, name: HOSTILE, yield: 0.5, shippedPerYear: 1000, escapeCost: 3 }
  const tester = { ...DEFAULT_TESTER, name: HOSTILE, currency: HOSTILE, vectorMHz: 0.001 }
  return reportOfNand(
    {
      title: HOSTILE,
      author: HOSTILE,
      company: HOSTILE,
      subject: HOSTILE,
      files: [{ role: HOSTILE, name: HOSTILE, sha256: HOSTILE, sizeBytes: 1 }],
      options: [{ label: HOSTILE, value: HOSTILE }],
      commandLine: HOSTILE,
      circuit: { name: HOSTILE, inputs: 2, outputs: 1, flipFlops: 0, gates: 1 },
      lost: [{ block: HOSTILE, faults: 6, detected: 5, lost: 1, cheapest: null }],
      notices: [HOSTILE],
    },
    { product, tester, limits: [{ kind: 'patterns', most: 2 }] },
  )
}

describe('the pages of a report', () => {
  const wordsOf = (page: object): string => JSON.stringify(page)

  test('say the answer and the caution first', () => {
    const { title, pages } = buildReport(reportOfNand())
    expect(title).toBe('nand can be tested with 3 patterns in 3.00\u00a0ms')
    expect(wordsOf(pages[0])).toContain(CAUTION)
    expect(wordsOf(pages[0])).toContain('100.00')
    expect(pages).toHaveLength(6)
  })

  test('say no where the answer is no, with the nearest', () => {
    const input = reportOfNand(
      {},
      { limits: [{ kind: 'patterns', most: 2 }], goals: [{ kind: 'coverage', least: 1 }] },
    )
    const { title, pages } = buildReport(input)
    expect(title).toBe('nand: these patterns can’t do what is asked')
    expect(wordsOf(pages[0])).toContain(
      "The goal of a coverage of 100.00\u00a0% can't be reached: the limit of 2 patterns stands in the way. The nearest is 83.33\u00a0%.",
    )
  })

  test('speak of what a limit stops only where it stops the cut', () => {
    const loose = Float64Array.of(4, 6, 6, 6)
    const stopped = reportOfNand({}, { limits: [{ kind: 'patterns', most: 2 }], ceiling: loose })
    expect(wordsOf(buildReport(stopped).pages[0])).toContain('no choice could add more than 1 faults')
    const goal = { kind: 'coverage', least: 0.8 } as const
    const ended = reportOfNand({}, { goals: [goal], ceiling: loose })
    expect(wordsOf(buildReport(ended).pages[0])).not.toContain('no choice could add')
  })

  test('name every input, so that the figures can be had again', () => {
    const [, , , , reproduce] = buildReport(reportOfNand()).pages
    for (const fact of ['nand.bench', '01234567 89abcdef', 'steepest first', 'version 1.2.3']) {
      expect(wordsOf(reproduce)).toContain(fact)
    }
    expect(wordsOf(reproduce)).toContain('tallycut plan nand.bench nand.vec')
  })

  test('leave out the parts that are not asked for, never the first', () => {
    const nothing = Object.fromEntries(Object.keys(ALL_SECTIONS).map((section) => [section, false]))
    expect(buildReport(reportOfNand({ sections: nothing as typeof ALL_SECTIONS })).pages).toHaveLength(1)
  })

  test('work out nothing for a year without a volume', () => {
    const [, , money] = buildReport(reportOfNand()).pages
    expect(wordsOf(money)).toContain('nothing is worked out for a year')
    expect(wordsOf(money)).not.toMatch(/NaN|Infinity|undefined|null,null/)
  })

  test.each([
    ['no patterns', { limits: [{ kind: 'patterns', most: 0 } as const] }],
    ['no ceiling', { ceiling: null }],
    ['a perfect yield', { product: { ...DEFAULT_PRODUCT, yield: 1, shippedPerYear: 10, escapeCost: 0 } }],
  ])('hold with %s', (_, planChanges) => {
    const html = htmlReport(buildReport(reportOfNand({}, planChanges)))
    expect(html).not.toMatch(/NaN|Infinity|undefined/)
    expect(html).not.toMatch(/>0<[^>]*>\s*<span class="unit">DPPM/)
  })
})

test('assumptions that are lists are written out', () => {
  const planned = { bursts: null, patterns: null, yieldIn: null, otherMs: 0, tester: {} }
  const product = {
    ...DEFAULT_PRODUCT,
    ranges: { yield: [0.8, 0.9], sites: [2, 4] },
    areaShares: [
      { block: 'a', share: 0.75 },
      { block: '*', share: 0.25 },
    ],
    insertions: [
      { ...planned, name: 'sort' },
      { ...planned, name: 'final' },
    ],
  }
  const [, assumptions, money] = buildReport(reportOfNand({}, { product })).pages
  expect(JSON.stringify(assumptions)).toContain('a 0.75, * 0.25 •')
  expect(JSON.stringify(assumptions)).toContain('yield 0.8 to 0.9, sites 2 to 4 •')
  expect(JSON.stringify(assumptions)).toContain('sort, final •')
  expect(JSON.stringify(money)).toContain('["sort","3","100.00"')
})

describe('an HTML report', () => {
  test('is one file without script, with nothing from elsewhere', () => {
    const html = htmlReport(buildReport(reportOfNand()))
    expect(html).not.toMatch(/<script|<link|<img|@import|url\((?!#)|https?:/)
    expect(html).toContain("default-src 'none'")
  })

  test('escapes every text from outside', () => {
    const html = htmlReport(buildReport(hostileReport()))
    expect(html).not.toContain('<script')
    expect(html).not.toMatch(/[\u0000\u202e]/)
    expect(html.match(/&#60;script&#62;/g)!.length).toBeGreaterThan(10)
  })

  test('closes every element that it opens', () => {
    const html = htmlReport(buildReport(hostileReport()))
    const open: string[] = []
    for (const [, close, name, rest] of html.matchAll(/<(\/?)([a-z][a-zA-Z0-9]*)([^<>]*)>/g)) {
      if (name === 'meta' || rest.endsWith('/')) continue
      if (close === '') open.push(name)
      else expect(open.pop()).toBe(name)
    }
    expect(open).toEqual([])
  })
})

describe('a PDF report', () => {
  test('is a PDF, and the same bytes for the same report', async () => {
    const once = await pdfReport(buildReport(hostileReport()), '2026-12-01')
    const again = await pdfReport(buildReport(hostileReport()), '2026-12-01')
    expect(new TextDecoder('latin1').decode(once.subarray(0, 5))).toBe('%PDF-')
    expect(Buffer.compare(once, again)).toBe(0)
  })
})

describe('a CSV report', () => {
  test('has a row for each pattern with figures in full', () => {
    const lines = [...csvReport(reportOfNand())].join('').split('\r\n')
    expect(lines).toHaveLength(6)
    expect(lines[0]).toMatch(/^place,pattern,in_budget,gain,detected,coverage,cycles,milliseconds,/)
    expect(lines[2]).toMatch(/^2,2,1,2,5,0\.8333333333333334,2,2,2,2,0,109101\.2\d+,/)
    expect(lines[4]).toMatch(/^4,1,0,0,6,1,4,4,/)
  })
})

describe('an XLSX report', () => {
  test('holds numbers as numbers and texts as texts', async () => {
    const files = unzip(Buffer.from(await xlsxReport(hostileReport())))
    const patterns = files.get('xl/worksheets/sheet2.xml')!
    // 5 rows: the head and 4 patterns. The place of the last is the number 4.
    expect(patterns.match(/<row /g)).toHaveLength(5)
    expect(patterns).toMatch(/<c r="A5"[^>]*><v>4<\/v>/)
    for (const text of files.values()) expect(text).not.toMatch(/<script|<f>|[\u0000\u202e]/)
    expect(files.get('xl/sharedStrings.xml')).toContain(CAUTION)
  })
})

/** Returns the texts in a ZIP file by name. Source: PKWARE's APPNOTE, sections 4.3.7 and 4.3.12. */
function unzip(zip: Buffer): Map<string, string> {
  const files = new Map<string, string>()
  for (let at = zip.indexOf('PK\x01\x02'); at >= 0; at = zip.indexOf('PK\x01\x02', at + 1)) {
    const [size, nameLength] = [zip.readUInt32LE(at + 20), zip.readUInt16LE(at + 28)]
    const name = zip.toString('utf8', at + 46, at + 46 + nameLength)
    const local = zip.readUInt32LE(at + 42)
    const start = local + 30 + zip.readUInt16LE(local + 26) + zip.readUInt16LE(local + 28)
    const bytes = zip.subarray(start, start + size)
    files.set(name, (zip.readUInt16LE(at + 10) === 8 ? inflateRawSync(bytes) : bytes).toString('utf8'))
  }
  return files
}
