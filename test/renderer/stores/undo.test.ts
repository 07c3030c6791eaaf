import { beforeEach, expect, test } from 'vitest'
import { useNotices } from '../../../renderer/stores/notices.ts'
import { useUndo } from '../../../renderer/stores/undo.ts'
import { fakeApi, type FakeApi } from '../../helpers/fake-api.ts'

let host: FakeApi
beforeEach(() => {
  host = fakeApi({ 'undo.restore': () => ({}) })
})

test('what was deleted last comes back first, and can be deleted again', async () => {
  const undo = useUndo()
  let tokens = 0
  const deletion = (label: string) => ({
    label,
    delete: () => Promise.resolve({ undoToken: `${label} ${++tokens}` }),
  })
  await undo.remove(deletion('Run 1'))
  await undo.remove(deletion('Run 2'))
  expect(undo.undoLabel).toBe('Run 2')
  await undo.undo()
  expect(host.asked.at(-1)).toEqual({ name: 'undo.restore', input: { undoToken: 'Run 2 2' } })
  expect([undo.undoLabel, undo.redoLabel]).toEqual(['Run 1', 'Run 2'])
  await undo.redo()
  expect([undo.undoLabel, undo.redoLabel]).toEqual(['Run 2', null])
  await undo.undo()
  expect(host.asked.at(-1)?.input).toEqual({ undoToken: 'Run 2 3' })
})

test('a new deletion ends what could be done again', async () => {
  const undo = useUndo()
  const deletion = (label: string) => ({ label, delete: () => Promise.resolve({ undoToken: label }) })
  await undo.remove(deletion('A'))
  await undo.undo()
  await undo.remove(deletion('B'))
  expect(undo.redoLabel).toBeNull()
})

test('what is refused is told with its reason and stays as it was', async () => {
  delete host.answers['undo.restore']
  const undo = useUndo()
  await undo.remove({ label: 'Run 1', delete: () => Promise.resolve({ undoToken: 'x' }) })
  await undo.undo()
  expect(useNotices().notices.at(-1)).toMatchObject({
    kind: 'bad',
    title: 'Run 1 could not be brought back',
    text: 'Nothing answers undo.restore.',
  })
  expect(undo.redoLabel).toBeNull()
})
