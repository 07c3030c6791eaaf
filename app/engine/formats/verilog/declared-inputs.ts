import type { Source } from '../../source/source.ts'

/** The most bits of one vector that are named. */
const MOST_BITS = 65_536

/**
 * Returns the names of what the modules of a text declare as input or inout, each bit of a vector by its own name, found
 * by keywords alone: enough to tell which signals of a pattern file can be pins before the netlist is read.
 */
export function declaredInputs(sources: readonly Source[]): Set<string> {
  const declaration =
    /\b(?:input|inout)\b\s*(?:(?:wire|tri|reg|signed)\s+)*(?:\[\s*(\d+)\s*:\s*(\d+)\s*\])?([^;)]*?)(?=\b(?:input|output|inout)\b|[;)])/g
  const names = new Set<string>()
  for (const { text } of sources) {
    for (const [, from, to, list] of text.matchAll(declaration)) {
      for (const [word, escaped] of list.matchAll(/\\(\S+)|[A-Za-z_][\w$]*/g)) {
        const name = escaped ?? word
        names.add(name)
        if (from !== undefined)
          for (const bit of bitsOf(Number(from), Number(to))) names.add(`${name}[${bit}]`)
      }
    }
  }
  return names
}

function* bitsOf(a: number, b: number): Generator<number, void, undefined> {
  const low = Math.min(a, b)
  const high = Math.min(Math.max(a, b), low + MOST_BITS)
  for (let bit = low; bit <= high; bit++) yield bit
}
