import type { NameTable } from './name-table.ts'

/** The reserved words of IEEE 1364-2005, annex B. Their name ids are their places in this list. */
const WORDS = [
  'always', 'and', 'assign', 'automatic', 'begin', 'buf', 'bufif0', 'bufif1', 'case', 'casex', 'casez', 'cell',
  'cmos', 'config', 'deassign', 'default', 'defparam', 'design', 'disable', 'edge', 'else', 'end', 'endcase',
  'endconfig', 'endfunction', 'endgenerate', 'endmodule', 'endprimitive', 'endspecify', 'endtable', 'endtask',
  'event', 'for', 'force', 'forever', 'fork', 'function', 'generate', 'genvar', 'highz0', 'highz1', 'if', 'ifnone',
  'incdir', 'include', 'initial', 'inout', 'input', 'instance', 'integer', 'join', 'large', 'liblist', 'library',
  'localparam', 'macromodule', 'medium', 'module', 'nand', 'negedge', 'nmos', 'nor', 'noshowcancelled', 'not',
  'notif0', 'notif1', 'or', 'output', 'parameter', 'pmos', 'posedge', 'primitive', 'pull0', 'pull1', 'pulldown',
  'pullup', 'pulsestyle_ondetect', 'pulsestyle_onevent', 'rcmos', 'real', 'realtime', 'reg', 'release', 'repeat',
  'rnmos', 'rpmos', 'rtran', 'rtranif0', 'rtranif1', 'scalared', 'showcancelled', 'signed', 'small', 'specify',
  'specparam', 'strong0', 'strong1', 'supply0', 'supply1', 'table', 'task', 'time', 'tran', 'tranif0', 'tranif1',
  'tri', 'tri0', 'tri1', 'triand', 'trior', 'trireg', 'unsigned', 'use', 'uwire', 'vectored', 'wait', 'wand',
  'weak0', 'weak1', 'while', 'wire', 'wor', 'xnor', 'xor',
] as const // prettier-ignore

export type Word = (typeof WORDS)[number]

export const KEYWORD_COUNT: number = WORDS.length

/** Interns every reserved word, first of all names, so that ids below KEYWORD_COUNT are reserved words. */
export function internKeywords(names: NameTable): void {
  for (const word of WORDS) names.internText(word)
}

/** The reserved word with that name id. */
export function wordOf(id: number): Word {
  const word = WORDS[id]
  if (word === undefined) throw new RangeError(`name ${id} is no reserved word`)
  return word
}
