import { writeFileSync } from 'node:fs'
import { writeFern, writeMoss } from './circuits.ts'
import { writePatterns } from './patterns.ts'

const FERN_WIDTH = 35 + 68
const MOSS_WIDTH = 29 + 92

/** The text of every file of the demo project, by name; the committed files beside this one are what it writes. */
export function demoFiles(): ReadonlyMap<string, string> {
  return new Map([
    ['fern.bench', writeFern()],
    ['moss.bench', writeMoss()],
    [
      'fern-a.vec',
      writePatterns('fern, pattern set A: random patterns of first silicon', {
        width: FERN_WIDTH,
        seed: 11,
        parts: [{ comment: 'even chances', count: 1024, chances: [] }],
      }),
    ],
    [
      'fern-b.vec',
      writePatterns('fern, pattern set B: fewer patterns, weighted for the limiter and the comparator', {
        width: FERN_WIDTH,
        seed: 12,
        parts: [
          { comment: 'even chances', count: 400, chances: [] },
          {
            comment: 'large samples, rare clears',
            count: 160,
            chances: [
              { inputs: 32, one: 0.8 },
              { inputs: 3, one: 0.2 },
            ],
          },
          {
            comment: 'accumulator below its limit, threshold close to it',
            count: 320,
            chances: [
              { inputs: 35, one: 0.5 },
              { inputs: 32, one: 0.5 },
              { inputs: 8, one: 0.02 },
            ],
            copy: { from: 43, to: 75, inputs: 24, flipped: 0.05 },
          },
          {
            comment: 'nearly empty accumulator',
            count: 120,
            chances: [
              { inputs: 35, one: 0.35 },
              { inputs: 40, one: 0.06 },
              { inputs: 24, one: 0.06 },
            ],
          },
        ],
      }),
    ],
    [
      'moss-a.vec',
      writePatterns('moss, pattern set A: random patterns of first silicon', {
        width: MOSS_WIDTH,
        seed: 21,
        parts: [{ comment: 'even chances', count: 640, chances: [] }],
      }),
    ],
    [
      'moss-b.vec',
      writePatterns('moss, pattern set B: timers near their end, running', {
        width: MOSS_WIDTH,
        seed: 22,
        parts: [
          { comment: 'even chances', count: 240, chances: [] },
          {
            comment: 'enabled, not stopped, timers almost run down',
            count: 320,
            chances: [
              { inputs: 26, one: 0.5 },
              { inputs: 1, one: 0.3 },
              { inputs: 1, one: 0.9 },
              { inputs: 1, one: 0.1 },
              { inputs: 64, one: 0.08 },
            ],
          },
          {
            comment: 'check sum almost empty',
            count: 120,
            chances: [
              { inputs: 27, one: 0.5 },
              { inputs: 1, one: 0.8 },
              { inputs: 1, one: 0.15 },
              { inputs: 76, one: 0.3 },
              { inputs: 16, one: 0.07 },
            ],
          },
        ],
      }),
    ],
  ])
}

if (process.argv[1] === import.meta.filename) {
  for (const [name, text] of demoFiles()) writeFileSync(new URL(name, import.meta.url), text)
}
