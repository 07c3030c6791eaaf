import { beforeEach, expect, test } from 'vitest'
import { inTurn } from '../../../renderer/stores/in-turn.ts'
import { useCutSubject } from '../../../renderer/stores/cut-subject.ts'
import { useProject } from '../../../renderer/stores/project.ts'
import { useUndo } from '../../../renderer/stores/undo.ts'
import { fakeApi } from '../../helpers/fake-api.ts'

beforeEach(() => {
  fakeApi({
    'projects.open': ({ path }) => ({
      path,
      name: path,
      readOnly: false,
      notice: null,
      products: [{ id: 1, name: 'Fern', coverage: null }],
      testers: 0,
    }),
  })
})

test('what was remembered of one project is not taken for another, whose products have the same numbers', async () => {
  const project = useProject()
  await project.open('/one')
  useCutSubject().set(1, { runId: 4, order: 'steepest', cut: 12, assumptions: {} as never })
  await useUndo().remove({ label: 'Run 1', delete: () => Promise.resolve({ undoToken: 'x' }) })
  await project.open('/one')
  expect([useCutSubject().subjects.size, useUndo().undoLabel]).toEqual([1, 'Run 1'])
  await project.open('/two')
  expect([useCutSubject().subjects.size, useUndo().undoLabel]).toEqual([0, null])
})

test('pieces of work in turn keep their order, and a failed one does not stop the next', async () => {
  const done: number[] = []
  const turn = inTurn()
  const slow = turn(() => new Promise<void>((end) => setTimeout(() => (done.push(1), end()), 20)))
  const failing = turn(() => Promise.reject(new Error('no')))
  const quick = turn(() => Promise.resolve(done.push(2)))
  await expect(failing).rejects.toThrow('no')
  await Promise.all([slow, quick])
  expect(done).toEqual([1, 2])
})
