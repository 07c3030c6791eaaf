import pdfmake from 'pdfmake'
import roboto from 'pdfmake/fonts/Roboto.js'
import { PALETTE } from './charts/palette.ts'
import { printable } from './printable.ts'
import type { Block, Chart, LabelledFigure, ReportDocument, Table } from './report-document.ts'
import { superscripts } from './superscripts.ts'

const MARGIN = { side: 48, top: 58, bottom: 48 }
const WIDTHS = { A4: 595.28, Letter: 612 } as const

type Node = Readonly<Record<string, unknown>>

/** Returns a report as a PDF with its fonts inside. The same report gives the same bytes. */
export async function pdfReport(report: ReportDocument, date: string): Promise<Uint8Array> {
  const fontFiles = new Set(Object.values(roboto.Roboto))
  pdfmake.setFonts(roboto)
  pdfmake.setUrlAccessPolicy(() => false)
  pdfmake.setLocalAccessPolicy((path) => fontFiles.has(path))
  const buffer = await pdfmake.createPdf(definition(report, date)).getBuffer()
  return new Uint8Array(buffer)
}

function definition(report: ReportDocument, date: string): Node {
  const { title, author, paper, pages } = report
  const width = WIDTHS[paper] - 2 * MARGIN.side
  return {
    pageSize: paper === 'A4' ? 'A4' : 'LETTER',
    pageMargins: [MARGIN.side, MARGIN.top, MARGIN.side, MARGIN.bottom],
    info: {
      title: printable(title),
      ...(author === null ? {} : { author: printable(author) }),
      creator: 'Tallycut',
      producer: 'Tallycut',
      creationDate: new Date(`${date}T00:00:00Z`),
    },
    defaultStyle: { font: 'Roboto', fontSize: 9.5, lineHeight: 1.25, color: PALETTE.text },
    header: () => pageHead(report, width),
    footer: (page: number, count: number) => ({
      text: `${page} of ${count}`,
      alignment: 'right',
      fontSize: 8.5,
      color: PALETTE.text3,
      margin: [MARGIN.side, 14, MARGIN.side, 0],
    }),
    content: pages.flatMap(({ blocks, foot }, at) => [
      ...blocks.map((block, place) => ({
        ...nodeOf(block, width),
        ...(at > 0 && place === 0 ? { pageBreak: 'before' } : {}),
      })),
      { text: printable(foot), fontSize: 8.5, color: PALETTE.text3, margin: [0, 14, 0, 0] },
    ]),
  }
}

function pageHead({ heads, author }: ReportDocument, width: number): Node {
  const [left, middle, right] = heads.map(printable)
  return {
    margin: [MARGIN.side, 28, MARGIN.side, 0],
    stack: [
      {
        columns: [
          { text: author === null ? left : `${left} · ${printable(author)}`, width: '*' },
          { text: middle, width: 'auto' },
          { text: right, width: '*', alignment: 'right' },
        ],
        columnGap: 10,
        fontSize: 8.5,
        color: PALETTE.text3,
      },
      { canvas: [{ type: 'line', x1: 0, y1: 3, x2: width, y2: 3, lineWidth: 0.7, lineColor: PALETTE.text }] },
    ],
  }
}

function nodeOf(block: Block, width: number): Node {
  switch (block.kind) {
    case 'title':
      return { text: printable(block.text), fontSize: 18, bold: true, lineHeight: 1.15, margin: [0, 8, 0, 6] }
    case 'heading':
      return {
        text: printable(block.text),
        fontSize: 10.5,
        bold: true,
        margin: [0, 9, 0, 2],
        headlineLevel: 1,
      }
    case 'lead':
      return {
        text: block.phrases.map(({ text, strong }) => ({ text: printable(text), bold: strong })),
        fontSize: 12,
        lineHeight: 1.3,
      }
    case 'text':
      return { text: runs(block.text), color: PALETTE.text2, margin: [0, 2, 0, 2] }
    case 'caution':
      return {
        text: [{ text: 'No. ', bold: true, color: PALETTE.bad }, printable(block.text)],
        margin: [0, 5, 0, 0],
      }
    case 'figures':
      return figures(block.figures)
    case 'chart':
      return {
        unbreakable: true,
        stack: [
          { svg: svg(block.chart), width },
          { text: printable(block.caption), fontSize: 8.5, color: PALETTE.text2, margin: [0, 3, 40, 0] },
        ],
        margin: [0, 8, 0, 2],
      }
    case 'table':
      return table(block.table)
    case 'list':
      return { ul: block.items.map((item) => ({ text: runs(item) })), color: PALETTE.text2 }
    case 'code':
      return {
        table: {
          widths: ['*'],
          body: [
            [{ text: printable(block.text), fontSize: 9, characterSpacing: 0.2, wordBreak: 'break-all' }],
          ],
        },
        layout: {
          hLineColor: () => PALETTE.line,
          vLineColor: () => PALETTE.line,
          fillColor: () => '#f5f7f6',
        },
        margin: [0, 2, 0, 4],
      }
    case 'columns': {
      const gap = 20
      const total = block.widths.reduce((sum, one) => sum + one, 0)
      return {
        columns: block.columns.map((blocks, at) => {
          const own = ((block.widths[at] ?? 1) / total) * (width - gap * (block.columns.length - 1))
          return { width: own, stack: blocks.map((one) => nodeOf(one, own)) }
        }),
        columnGap: gap,
      }
    }
  }
}

function runs(text: string): readonly Node[] {
  return superscripts(printable(text)).map((run) =>
    run.isRaised ? { text: run.text, sup: true } : { text: run.text },
  )
}

function svg({ width, height, markup }: Chart): string {
  return `<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 ${width} ${height}" width="${width}" height="${height}" font-family="Roboto">${markup}</svg>`
}

function figures(list: readonly LabelledFigure[]): Node {
  const row = (node: (one: LabelledFigure) => Node): readonly Node[] => list.map(node)
  const small = { fontSize: 8.5, color: PALETTE.text2 }
  return {
    table: {
      widths: list.map(() => '*'),
      body: [
        row(({ label }) => ({ text: printable(label), ...small, margin: [0, 5, 0, 0] })),
        row(({ figure: { value, unit } }) => ({
          text: [
            { text: value, fontSize: 15, bold: true },
            { text: unit === '' ? '' : ` ${unit}`, color: PALETTE.text3 },
          ],
        })),
        row(({ note }) => ({ text: printable(note), ...small, color: PALETTE.text3, margin: [0, 0, 0, 4] })),
      ],
    },
    layout: {
      hLineWidth: (at: number) => (at === 0 || at === 3 ? 0.7 : 0),
      vLineWidth: () => 0,
      hLineColor: () => PALETTE.lineStrong,
      paddingLeft: () => 0,
      paddingRight: () => 4,
      paddingTop: () => 0,
      paddingBottom: () => 0,
    },
    margin: [0, 10, 0, 6],
  }
}

/** A word that would widen its column past the page. */
const LONG_WORD = /\S{28}/

const ALIGNMENT = { text: 'left', number: 'right', code: 'left' } as const

function table({ columns, rows, marked }: Table): Node {
  const hasHeads = columns.some(({ head }) => head !== '')
  const heads = columns.map(({ head, holds }) => ({
    text: printable(head),
    fontSize: 8.5,
    color: PALETTE.text3,
    alignment: ALIGNMENT[holds],
  }))
  const body = rows.map((row, at) =>
    row.map((cell, column) => {
      const holds = columns[column]?.holds ?? 'text'
      return {
        text: printable(cell),
        ...(LONG_WORD.test(cell) ? { wordBreak: 'break-all' } : {}),
        alignment: ALIGNMENT[holds],
        ...(holds === 'code' ? { fontSize: 7.5 } : {}),
        ...(at === marked ? { bold: true, color: PALETTE.cutText } : {}),
      }
    }),
  )
  return {
    table: {
      headerRows: hasHeads ? 1 : 0,
      dontBreakRows: true,
      widths: columns.map((_, at) => (at === 0 ? '*' : 'auto')),
      body: hasHeads ? [heads, ...body] : body,
    },
    layout: {
      hLineWidth: (at: number) => (at === 0 ? 0 : 0.5),
      vLineWidth: () => 0,
      hLineColor: (at: number) => (hasHeads && at === 1 ? PALETTE.lineStrong : PALETTE.line),
      paddingLeft: (at: number) => (at === 0 ? 0 : 8),
      paddingRight: () => 0,
      paddingTop: () => 1.6,
      paddingBottom: () => 1.2,
    },
    margin: [0, 2, 0, 4],
  }
}
