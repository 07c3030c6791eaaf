import { describe, expect, it } from 'vitest'
import { caseText, problemOf } from './fuzz-case.ts'
import { FUZZED_READERS } from './fuzzed-readers.ts'

const CASES = 400
const SEED = 20_261_201

// The long form is `npm run fuzz`, in workers that are ended when an input takes more than a second.
describe.each(FUZZED_READERS.filter(({ seeds }) => seeds.length > 0))('the reader of $name', (reader) => {
  it('reads its seeds', () => {
    expect(reader.seeds.map((seed) => problemOf(reader, seed))).toEqual(reader.seeds.map(() => null))
  })

  it(`reads or refuses ${CASES} mutated inputs, each diagnostic with its place`, () => {
    const problems: string[] = []
    for (let number = 0; number < CASES; number++) {
      const problem = problemOf(reader, caseText(reader, SEED, number))
      if (problem !== null) problems.push(`case ${number}: ${problem}`)
    }
    expect(problems).toEqual([])
  })
})
