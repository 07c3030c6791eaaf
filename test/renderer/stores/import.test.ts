import { beforeEach, expect, test } from 'vitest'
import { useImport } from '../../../renderer/stores/import.ts'
import { freeName, stemOf } from '../../../renderer/stores/incoming-files.ts'
import { fakeApi, type FakeApi } from '../../helpers/fake-api.ts'

let host: FakeApi
beforeEach(() => {
  host = fakeApi({
    'files.add': ({ name, bytes }) => ({ fileId: `id of ${name}`, name, sizeBytes: bytes.length }),
    'netlists.inspect': () => ({ inspectionId: 'i', files: [], account: null, diagnostics: [] }),
  })
})

const file = (name: string): File => new File(['x'], name)

test('files are taken for what their names say, zipped or not', async () => {
  const importing = useImport()
  await importing.add(['a.v', 'b.bench.gz', 'cells.LIB', 'c.stil', 'd.csv.gz', 'e.vec', 'readme'].map(file))
  expect(importing.files.map(({ role }) => role)).toEqual([
    'netlist',
    'netlist',
    'library',
    'patterns',
    'patterns',
    'patterns',
    'netlist',
  ])
})

test('files that come together are read together, once, with what the user chose', async () => {
  const importing = useImport()
  await importing.add([file('a.v'), file('b.v'), file('cells.lib'), file('p.stil')])
  importing.top = 'b'
  await importing.inspectNetlist()
  expect(host.asked.filter(({ name }) => name === 'netlists.inspect')).toEqual([
    {
      name: 'netlists.inspect',
      input: {
        fileIds: ['id of a.v', 'id of b.v'],
        libraryFileIds: ['id of cells.lib'],
        top: 'b',
        testPins: [],
        assumeScanned: false,
      },
    },
  ])
})

test('an answer to an earlier question does not replace a later one', async () => {
  const importing = useImport()
  const answers: ((id: string) => void)[] = []
  host.answers['netlists.inspect'] = () =>
    new Promise((answer) =>
      answers.push((inspectionId) => answer({ inspectionId, files: [], account: null, diagnostics: [] })),
    )
  await importing.add([file('a.v')])
  const first = importing.inspectNetlist()
  const second = importing.inspectNetlist()
  answers[1]!('second')
  answers[0]!('first')
  await Promise.all([first, second])
  expect(importing.netlist).toMatchObject({ status: 'ready', inspection: { inspectionId: 'second' } })
})

test('a file that can not be taken in is told, the others stay', async () => {
  const importing = useImport()
  host.answers['files.add'] = ({ name }) => {
    if (name === 'big.v') throw new Error('The file is too large.')
    return { fileId: name, name, sizeBytes: 1 }
  }
  await importing.add([file('big.v'), file('a.v')])
  expect(importing.problem).toBe('big.v: The file is too large.')
  expect(importing.files.map(({ name }) => name)).toEqual(['a.v'])
})

test('names are proposed from files, and are free', () => {
  expect(stemOf('s27_scan.v.gz')).toBe('s27_scan')
  expect(stemOf('.v')).toBe('.v')
  expect(freeName('r1', ['r1', 'r1 2'])).toBe('r1 3')
  expect(freeName('r2', ['r1'])).toBe('r2')
})
