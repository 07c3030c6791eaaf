import { afterEach, beforeEach, expect, test, vi } from 'vitest'
import { decodeWire, encodeWire } from '../../../app/contract/wire.ts'
import { httpDoor } from '../../../renderer/api/http-door.ts'

const ask = vi.fn<typeof fetch>()

beforeEach(() => {
  sessionStorage.clear()
  history.replaceState(null, '', '/?token=secret#/tasks')
  vi.stubGlobal('fetch', ask)
})
afterEach(() => vi.unstubAllGlobals())

test('the token is taken out of the address, kept for the session, and sent with each request', async () => {
  ask.mockResolvedValue(new Response(encodeWire({ ok: true, value: { bytes: new Uint8Array([1, 2]) } })))
  const answer = await httpDoor().call('files.add', { name: 'a', bytes: new Uint8Array([3]) })
  expect(location.search).toBe('')
  expect(location.hash).toBe('#/tasks')
  expect(sessionStorage.getItem('tallycut-token')).toBe('secret')
  const [path, request] = ask.mock.calls[0]!
  expect(path).toBe('api/files.add')
  expect(request?.headers).toMatchObject({ 'x-tallycut-token': 'secret' })
  expect(decodeWire(request?.body as Uint8Array)).toEqual({ name: 'a', bytes: new Uint8Array([3]) })
  expect(answer).toEqual({ ok: true, value: { bytes: new Uint8Array([1, 2]) } })
})

test('a host that is gone, and an answer that is none, are failures in words', async () => {
  const door = httpDoor()
  ask.mockRejectedValue(new TypeError('failed to fetch'))
  expect(await door.call('settings.get', {})).toMatchObject({
    ok: false,
    error: { message: expect.stringMatching(/does not answer any more/) },
  })
  ask.mockResolvedValue(new Response('<html>'))
  expect(await door.call('settings.get', {})).toMatchObject({ ok: false, error: { code: 'internal' } })
})
