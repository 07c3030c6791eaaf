import { existsSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { randomBench } from '../helpers/random-circuit.ts'

/** A circuit of the bench: its name, and how to get its `.bench` text. */
export type BenchCircuit = { readonly name: string; readonly text: () => string }

const data = join(import.meta.dirname, '../../../shared/data/circuits')

/** Circuits of our own making, the same on every machine, and open benchmark circuits where they lie beside the repository. */
export const CIRCUITS: readonly BenchCircuit[] = [
  { name: 'multiplier-24', text: () => arrayMultiplier(24) },
  {
    name: 'random-20000',
    text: () => randomBench(11, { inputs: 200, gates: 20_000, flipFlops: 1500, outputs: 300 }),
  },
  ...['iscas89/s38584.1', 'iscas85/c6288', 'itc99/b17', 'itc99/b21']
    .map((path) => ({ name: path.slice(path.indexOf('/') + 1), file: join(data, `${path}.bench`) }))
    .filter(({ file }) => existsSync(file))
    .map(({ name, file }) => ({ name, text: () => readFileSync(file, 'utf8') })),
]

/** A million gates, for the row that asks whether such a circuit ends and in how much memory. */
export const MILLION: BenchCircuit = {
  name: 'random-1000000',
  text: () => randomBench(13, { inputs: 2000, gates: 1_000_000, flipFlops: 50_000, outputs: 2000 }),
}

/** An unsigned array multiplier of n × n bits from AND gates and full adders (common practice, no source). */
function arrayMultiplier(n: number): string {
  const lines: string[] = []
  for (let bit = 0; bit < n; bit++) lines.push(`INPUT(a${bit})`, `INPUT(b${bit})`)
  let gates = 0
  const gate = (kind: string, ...pins: string[]): string => {
    const net = `g${gates++}`
    lines.push(`${net} = ${kind}(${pins.join(', ')})`)
    return net
  }
  let row = Array.from({ length: n }, (_, bit) => gate('AND', `a${bit}`, 'b0'))
  const product = [row[0]]
  let top: string | null = null
  for (let bit = 1; bit < n; bit++) {
    const partial = Array.from({ length: n }, (_, at) => gate('AND', `a${at}`, `b${bit}`))
    const above = [...row.slice(1), ...(top === null ? [] : [top])]
    let carry: string | null = null
    row = partial.map((pin, at) => {
      const other = above[at]
      const terms = [pin, other, carry].filter((term) => term !== undefined && term !== null)
      if (terms.length === 1) return pin
      const half = gate('XOR', terms[0], terms[1])
      const both = gate('AND', terms[0], terms[1])
      if (terms.length === 2) {
        carry = both
        return half
      }
      carry = gate('OR', both, gate('AND', half, terms[2]))
      return gate('XOR', half, terms[2])
    })
    top = carry
    product.push(row[0])
  }
  product.push(...row.slice(1), ...(top === null ? [] : [top]))
  for (const net of product) lines.push(`OUTPUT(${net})`)
  return lines.join('\n') + '\n'
}
