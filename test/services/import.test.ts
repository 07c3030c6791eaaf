import { gzipSync } from 'node:zlib'
import { describe, expect, test } from 'vitest'
import { adderProject, ALL_EIGHT, SERIAL_ADDER, testApplication } from '../helpers/test-application.ts'

describe('netlists', () => {
  test('an inspection counts what domain.md counts: lines, faults on both values of each, classes', async () => {
    const application = testApplication()
    const { productId } = await adderProject(application)
    const { netlists } = await application.call('products.get', { id: productId })
    // SOURCE: counted by hand. 8 nets; a, b, half and carry go to two places each: 8 stems and 8 branches.
    expect(netlists[0]).toMatchObject({
      files: ['adder.bench'],
      account: {
        format: 'bench',
        inputs: 2,
        outputs: 1,
        flipFlops: 1,
        gates: 5,
        nets: 8,
        lines: 16,
        faults: 32,
      },
    })
  })

  const bad: readonly (readonly [string, Uint8Array, string])[] = [
    ['an empty file', new Uint8Array(0), 'empty'],
    ['noise', new Uint8Array(5000).map((_, at) => (at * 7) % 256), 'no text'],
    ['a text of another kind', new TextEncoder().encode('Dear all,\nplease find attached.\n'), ''],
    ['a netlist cut off', new TextEncoder().encode('INPUT(a)\nOUTPUT(z)\nz = AND(a'), ''],
    ['a circuit without outputs', new TextEncoder().encode('INPUT(a)\nz = NOT(a)\n'), 'OUTPUT'],
    ['a loop', new TextEncoder().encode('INPUT(a)\nOUTPUT(x)\nx = AND(a, y)\ny = NOT(x)\n'), ''],
    ['100 MB in one line', new Uint8Array(100_000_000).fill(0x61), ''],
    ['gzip cut off', gzipSync(SERIAL_ADDER).subarray(0, 40), ''],
  ]
  test.each(bad)('%s is explained with its place and can not be saved', async (_, bytes, word) => {
    const { call, faults } = testApplication()
    await call('projects.create', { name: 'P' })
    const { id: productId } = await call('products.create', { name: 'A' })
    const { fileId } = await call('files.add', { name: 'x.bench', bytes: Uint8Array.from(bytes) })
    const { account, diagnostics, inspectionId } = await call('netlists.inspect', { fileIds: [fileId] })
    expect(account).toBeNull()
    expect(diagnostics.some(({ severity, file }) => severity === 'error' && file === 'x.bench')).toBe(true)
    expect(diagnostics.map(({ message }) => message).join(' ')).toContain(word)
    await expect(call('netlists.save', { productId, inspectionId, name: 'r1' })).rejects.toMatchObject({
      code: 'bad-file',
    })
    expect((await call('products.get', { id: productId })).netlists).toEqual([])
    expect(faults).toEqual([])
    const [task] = (await call('tasks.list', {})).tasks
    expect(task).toMatchObject({
      state: 'failed',
      message: expect.stringMatching(/^\d+ errors?, .*nothing to save$/),
    })
  })

  test('a task says what was read', async () => {
    const { call, addText } = testApplication()
    await call('projects.create', { name: 'P' })
    await call('netlists.inspect', { fileIds: [await addText('adder.bench', SERIAL_ADDER)] })
    expect((await call('tasks.list', {})).tasks).toMatchObject([
      { title: 'Reading adder.bench', state: 'done', message: '5 gates' },
    ])
  })

  test('what a source of X costs in coverage is estimated, and added up', async () => {
    const { call, addText } = testApplication()
    await call('projects.create', { name: 'P' })
    const text =
      'module m(input a, b, output y, z); BOX u (.I(b), .O(x)); and (y, a, x); not (z, a); endmodule'
    const { account } = await call('netlists.inspect', { fileIds: [await addText('m.v', text)] })
    const costs = account?.unusableCosts
    expect(account?.unusable).toMatchObject([{ kind: 'black box', count: 1 }])
    expect(costs?.kinds).toEqual([{ kind: 'black box', coverage: costs?.together }])
    expect(costs?.together).toBeGreaterThan(0)
    // Nothing stands in the way of any fault of an AND and an inverter once the box is known.
    expect((costs?.coverage ?? 0) + (costs?.together ?? 0)).toBeCloseTo(1)
  })

  test('names are taken once in a product', async () => {
    const application = testApplication()
    const { productId } = await adderProject(application)
    const { call, addText } = application
    const { inspectionId } = await call('netlists.inspect', {
      fileIds: [await addText('b.bench', SERIAL_ADDER)],
    })
    await expect(call('netlists.save', { productId, inspectionId, name: 'r1' })).rejects.toMatchObject({
      code: 'name-taken',
    })
    expect((await call('netlists.save', { productId, inspectionId, name: 'r2' })).name).toBe('r2')
  })

  test('files that were given up can not be read', async () => {
    const { call, addText } = testApplication()
    const fileId = await addText('x.bench', SERIAL_ADDER)
    await call('files.drop', { fileIds: [fileId] })
    await expect(call('netlists.inspect', { fileIds: [fileId] })).rejects.toMatchObject({ code: 'not-found' })
  })
})

describe('pattern sets', () => {
  test('a pattern of the wrong width is named with its line, its width and the width expected', async () => {
    const application = testApplication()
    const { netlistId } = await adderProject(application)
    const { call, addText } = application
    const fileIds = [await addText('wrong.vec', '010\n0101\n011\n')]
    const { account, diagnostics } = await call('patternSets.inspect', { netlistId, fileIds })
    expect(account).toBeNull()
    expect(diagnostics[0]).toMatchObject({ code: 'pattern-width', line: 2 })
    expect(diagnostics[0]?.message).toMatch(/4/)
    expect(diagnostics[0]?.message).toMatch(/3/)
  })

  test('expected values that the netlist does not give tell that the patterns are of another netlist', async () => {
    const application = testApplication()
    const { netlistId } = await adderProject(application)
    const { call, addText } = application
    // SOURCE: a full adder by hand. Pattern a b carry; expected sum, then next carry. The last one is wrong.
    const fileIds = [await addText('e.vec', '110 LH\n101 LH\n111 HH\n001 LL\n')]
    const { account } = await call('patternSets.inspect', { netlistId, fileIds })
    expect(account?.expected).toEqual({
      compared: 8,
      mismatches: 1,
      first: [{ pattern: 4, output: 'sum', expected: 'L', simulated: 'H' }],
    })
  })

  test('X, cycles and several files are counted', async () => {
    const application = testApplication()
    const { productId, netlistId } = await adderProject(application)
    const { call, addText } = application
    const fileIds = [await addText('a.vec', '0X0 @5\n11X @7\n'), await addText('b.vec', '111 @1\n')]
    const { account, inspectionId } = await call('patternSets.inspect', { netlistId, fileIds })
    expect(account).toMatchObject({ patterns: 3, unknownInputs: 2, cyclesGiven: 13, expected: null })
    const saved = await call('patternSets.save', { productId, inspectionId, name: 'Two files' })
    expect(saved.files).toEqual(['a.vec', 'b.vec'])
  })

  test('patterns run only on the netlist that they were read for', async () => {
    const application = testApplication()
    const { productId, patternSetId } = await adderProject(application)
    const { call, addText } = application
    const read = await call('netlists.inspect', { fileIds: [await addText('b.bench', SERIAL_ADDER)] })
    const other = await call('netlists.save', { productId, inspectionId: read.inspectionId, name: 'r2' })
    await expect(call('runs.start', { netlistId: other.id, patternSetId })).rejects.toMatchObject({
      code: 'bad-input',
    })
    expect(ALL_EIGHT.split('\n')).toHaveLength(8)
  })
})
