import { describe, expect, test } from 'vitest'
import { operations } from '../../app/contract/operations.ts'
import { OPERATION_NAMES } from '../../app/contract/names.ts'
import { testApplication } from '../helpers/test-application.ts'

describe('dispatch', () => {
  test('knows every operation of the contract by name', () => {
    expect([...OPERATION_NAMES].sort()).toEqual(Object.keys(operations).sort())
  })

  test.each(['nope', '__proto__', 'constructor', 'toString'])(
    'says that there is no operation %s',
    async (name) => {
      const { application } = testApplication()
      expect(await application.dispatch(name, {})).toMatchObject({ ok: false, error: { code: 'not-found' } })
    },
  )

  test('every operation refuses noise without a fault, whether a project is open or not', async () => {
    const { application, call, faults } = testApplication()
    const noise = [
      null,
      7,
      'text',
      [],
      { id: 'x' },
      { id: -1 },
      { runId: 1e99 },
      { bytes: [1] },
      { name: '' },
    ]
    for (const isOpen of [false, true]) {
      if (isOpen) await call('projects.create', { name: 'Open' })
      for (const name of OPERATION_NAMES) {
        if (name === 'projects.openDemo' || name === 'projects.close') continue
        for (const input of noise) {
          const result = await application.dispatch(name, input)
          if (!result.ok) expect(result.error.code).not.toBe('internal')
        }
      }
    }
    expect(faults).toEqual([])
  })

  test('says what is missing where a field has the wrong form', async () => {
    const { application } = testApplication()
    const result = await application.dispatch('projects.create', { name: '   ' })
    expect(result).toMatchObject({ ok: false, error: { code: 'bad-input', details: [{ path: 'name' }] } })
  })

  test('what needs a project says so while none is open', async () => {
    const { application } = testApplication()
    for (const name of ['testers.list', 'products.get', 'runs.start'] as const) {
      const input = { id: 1, netlistId: 1, patternSetId: 1 }
      expect(await application.dispatch(name, input)).toMatchObject({ error: { code: 'no-project' } })
    }
  })
})
