import { escapeMarkup } from './printable.ts'
import { PALETTE } from './charts/palette.ts'
import type { Block, Chart, LabelledFigure, ReportDocument, ReportPage, Table } from './report-document.ts'
import { superscripts } from './superscripts.ts'

/**
 * Returns a report as one HTML file: no script, nothing loaded from elsewhere, every text escaped. It prints as the
 * paper says, light on any screen.
 */
export function htmlReport(report: ReportDocument): string {
  const { title, author, pages, paper } = report
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="default-src 'none'; style-src 'unsafe-inline'">
<meta name="viewport" content="width=device-width">
<meta name="color-scheme" content="light">
<meta name="generator" content="Tallycut">
${author === null ? '' : `<meta name="author" content="${escapeMarkup(author)}">\n`}<title>${escapeMarkup(title)}</title>
<style>${styles(paper)}</style>
</head>
<body>
<main>
${pages.map((page, at) => sheet(report, page, at + 1)).join('\n')}
</main>
</body>
</html>
`
}

function sheet(
  { heads, pages, author }: ReportDocument,
  { blocks, foot }: ReportPage,
  number: number,
): string {
  const [left, middle, right] = heads.map(escapeMarkup)
  const by = author === null ? '' : ` · ${escapeMarkup(author)}`
  return `<section class="sheet" aria-label="Part ${number} of ${pages.length}">
<header><span>${left}${by}</span><span>${middle}</span><span>${right}</span></header>
${blocks.map((block) => markupOf(block, number === 1)).join('\n')}
<footer><span>${escapeMarkup(foot)}</span><span>part ${number} of ${pages.length}</span></footer>
</section>`
}

function markupOf(block: Block, isFirst: boolean): string {
  switch (block.kind) {
    case 'title':
      return isFirst
        ? `<h1>${escapeMarkup(block.text)}</h1>`
        : `<h2 class="part">${escapeMarkup(block.text)}</h2>`
    case 'heading':
      return `<h3>${escapeMarkup(block.text)}</h3>`
    case 'lead':
      return `<p class="lead">${block.phrases.map(({ text, strong }) => (strong ? `<b>${escapeMarkup(text)}</b>` : escapeMarkup(text))).join('')}</p>`
    case 'text':
      return `<p>${runs(block.text)}</p>`
    case 'caution':
      return `<p class="no"><b>No.</b> ${escapeMarkup(block.text)}</p>`
    case 'figures':
      return `<dl class="figures">${block.figures.map(figure).join('')}</dl>`
    case 'chart':
      return `<figure>${svg(block.chart)}<figcaption>${escapeMarkup(block.caption)}</figcaption></figure>`
    case 'table':
      return table(block.table)
    case 'list':
      return `<ul>${block.items.map((item) => `<li>${runs(item)}</li>`).join('')}</ul>`
    case 'code':
      return `<pre>${escapeMarkup(block.text)}</pre>`
    case 'columns': {
      const widths = block.widths.map((width) => `${width}fr`).join(' ')
      const columns = block.columns.map(
        (blocks) => `<div>${blocks.map((one) => markupOf(one, isFirst)).join('\n')}</div>`,
      )
      return `<div class="columns" style="grid-template-columns:${widths}">${columns.join('')}</div>`
    }
  }
}

function runs(text: string): string {
  return superscripts(text)
    .map((run) => (run.isRaised ? `<sup>${escapeMarkup(run.text)}</sup>` : escapeMarkup(run.text)))
    .join('')
}

function figure({ label, figure: { value, unit }, note }: LabelledFigure): string {
  const small = unit === '' ? '' : `<span class="unit">${escapeMarkup(unit)}</span>`
  return `<div><dt>${escapeMarkup(label)}</dt><dd class="value">${escapeMarkup(value)}${small}</dd><dd class="note">${escapeMarkup(note)}</dd></div>`
}

function svg({ width, height, label, markup }: Chart): string {
  return `<svg viewBox="0 0 ${width} ${height}" width="${width}" height="${height}" role="img" aria-label="${escapeMarkup(label)}">${markup}</svg>`
}

const COLUMN_CLASS = { text: '', number: ' class="n"', code: ' class="code"' } as const

function table({ columns, rows, marked }: Table): string {
  const numberClass = columns.map(({ holds }) => COLUMN_CLASS[holds])
  const hasHeads = columns.some(({ head }) => head !== '')
  const heads = columns.map(({ head }, at) => `<th scope="col"${numberClass[at]}>${escapeMarkup(head)}</th>`)
  const body = rows.map((row, at) => {
    const cells = row.map((cell, column) =>
      column === 0
        ? `<th scope="row"${numberClass[0]}>${escapeMarkup(cell)}</th>`
        : `<td${numberClass[column]}>${escapeMarkup(cell)}</td>`,
    )
    return `<tr${at === marked ? ' class="marked"' : ''}>${cells.join('')}</tr>`
  })
  return `<table>${hasHeads ? `<thead><tr>${heads.join('')}</tr></thead>` : ''}<tbody>${body.join('\n')}</tbody></table>`
}

const PAPERS = { A4: { width: 794, height: 1123 }, Letter: { width: 816, height: 1056 } } as const

function styles(paper: ReportDocument['paper']): string {
  const { width, height } = PAPERS[paper]
  const c = PALETTE
  return `
:root{color-scheme:light}
*{box-sizing:border-box}
html{font:13px/20px "Segoe UI Variable Text","Segoe UI",-apple-system,BlinkMacSystemFont,"Adwaita Sans",Inter,Cantarell,"Noto Sans","Liberation Sans",system-ui,sans-serif;font-variant-numeric:tabular-nums lining-nums;color:${c.text};background:${c.ground};-webkit-print-color-adjust:exact;print-color-adjust:exact}
body,h1,h2,h3,p,ul,dl,dd,figure,pre{margin:0;padding:0}
main{padding:24px 0 40px}
.sheet{width:${width}px;max-width:100%;min-height:${height}px;margin:0 auto 24px;padding:52px 64px 40px;background:#fff;display:flex;flex-direction:column;overflow-wrap:anywhere;box-shadow:0 1px 2px rgb(16 28 24/.1),0 6px 20px rgb(16 28 24/.12)}
header,footer{display:flex;justify-content:space-between;gap:16px;font-size:12px;line-height:16px;color:${c.text3}}
header span:last-child,footer span:last-child{flex:none}header span:first-child{max-width:35%}
header{border-bottom:1px solid ${c.text};padding-bottom:8px}
footer{margin-top:auto;border-top:1px solid ${c.line};padding-top:8px}
h1{font-size:26px;line-height:32px;font-weight:600;letter-spacing:-.3px;margin:26px 0 10px;text-wrap:balance;overflow-wrap:anywhere}
h2.part{font-size:20px;line-height:26px;font-weight:600;margin:26px 0 8px}
h3{font-size:14px;line-height:20px;font-weight:600;margin:18px 0 3px}
.columns h3:first-child{margin-top:0}
.lead{font-size:16px;line-height:25px;text-wrap:pretty}
.lead b{font-weight:600}
p{text-wrap:pretty}
p:not(.lead,.no){color:${c.text2}}
.no{margin-top:10px;padding:6px 10px;border-left:3px solid ${c.bad}}
.no b{color:${c.bad}}
figure{margin:18px 0 0}
svg{display:block;width:100%;height:auto}
svg text{font-family:inherit}
figcaption{font-size:12px;line-height:16px;color:${c.text2};margin-top:6px;max-width:640px}
.figures{display:grid;grid-template-columns:repeat(5,auto);justify-content:space-between;gap:14px;border-top:1px solid ${c.lineStrong};border-bottom:1px solid ${c.lineStrong};padding:12px 0 11px;margin:18px 0}
dt,.note{font-size:12px;line-height:16px;color:${c.text2}}
.note{color:${c.text3}}
.value{font-size:21px;line-height:28px;font-weight:600;white-space:nowrap}
.unit{font-size:13px;font-weight:400;color:${c.text3};margin-left:3px}
.columns{display:grid;gap:28px;margin-top:14px}
.figures + .columns{margin-top:0}h3 + .columns{margin-top:0}
table{border-collapse:collapse;width:100%;margin-top:2px}
th,td{text-align:left;font-weight:400;padding:2px 0 2px 10px;line-height:19px;border-bottom:1px solid ${c.line};vertical-align:top;overflow-wrap:anywhere}
th:first-child,td:first-child{padding-left:0}th[scope=row]{min-width:70px}.code{font:11px/19px ui-monospace,"SF Mono","Cascadia Mono","DejaVu Sans Mono","Liberation Mono",monospace}
thead th{font-size:12px;line-height:16px;color:${c.text3};border-bottom-color:${c.lineStrong};vertical-align:bottom}
.n{text-align:right;overflow-wrap:normal}
.marked>*{font-weight:600;color:${c.cutText}}
ul{padding-left:16px;color:${c.text2}}
pre{font:12px/18px ui-monospace,"SF Mono","Cascadia Mono","DejaVu Sans Mono","Liberation Mono",monospace;white-space:pre-wrap;overflow-wrap:anywhere;background:#f5f7f6;border:1px solid ${c.line};padding:8px 10px;margin:4px 0 10px}
sup{font-size:9px;line-height:0}
.sheet>*{flex:none}
.sheet>:nth-last-child(2){margin-bottom:20px}
table + p{margin-top:10px}
figure + table{margin-top:8px}
@page{size:${paper};margin:13mm 16mm 11mm}
@media print{html{background:#fff}main{padding:0}.sheet{width:auto;min-height:calc(100vh - 2px);margin:0;padding:0;box-shadow:none;break-after:page}.sheet:last-child{break-after:auto}thead{display:table-header-group}tr,figure,.figures{break-inside:avoid}h3{break-after:avoid}}
`.replaceAll('\n', '')
}
