import { request } from 'node:http'
import { afterEach, describe, expect, test } from 'vitest'
import { decodeWire, encodeWire } from '../../app/contract/wire.ts'
import { startWebHost, type WebHost } from '../../app/web/serve.ts'
import { testApplication } from '../helpers/test-application.ts'

type Asked = {
  readonly path?: string
  readonly method?: string
  readonly headers?: Record<string, string>
  readonly body?: unknown
}

let host: WebHost | null = null
afterEach(async () => {
  await host?.close()
  host = null
})

async function ask({
  path = '/api/app.info',
  method = 'POST',
  headers = {},
  body = {},
}: Asked): Promise<{ status: number; body: Buffer }> {
  host ??= await startWebHost(testApplication().application)
  const { port } = host
  return new Promise((done, failed) => {
    const asked = request({ host: '127.0.0.1', port, path, method, headers }, (response) => {
      const parts: Buffer[] = []
      response.on('data', (part: Buffer) => parts.push(part))
      response.on('end', () => done({ status: response.statusCode ?? 0, body: Buffer.concat(parts) }))
    })
    asked.on('error', failed)
    asked.end(method === 'POST' ? encodeWire(body) : undefined)
  })
}

const tokenOf = (url: string): string => new URL(url).searchParams.get('token') ?? ''

describe('the loopback host', () => {
  test('answers whoever has the token of this start', async () => {
    host = await startWebHost(testApplication().application)
    const { status, body } = await ask({ headers: { 'x-tallycut-token': tokenOf(host.url) } })
    expect(status).toBe(200)
    expect(decodeWire(body)).toMatchObject({ ok: true, value: { door: 'command line' } })
  })

  test.each([
    ['no token', {}],
    ['a wrong token', { 'x-tallycut-token': 'x'.repeat(43) }],
  ])('refuses %s', async (_, headers) => {
    expect((await ask({ headers })).status).toBe(403)
  })

  test.each([
    ['a host name that resolves here', { host: 'rebound.example' }],
    ['another page', { origin: 'http://elsewhere.example' }],
    ['a page without an origin', { origin: 'null' }],
  ])('refuses %s even with the token', async (_, headers) => {
    host = await startWebHost(testApplication().application)
    expect((await ask({ headers: { 'x-tallycut-token': tokenOf(host.url), ...headers } })).status).toBe(403)
  })

  test('streams events only to whoever has the token', async () => {
    expect((await ask({ path: '/api/events?token=wrong', method: 'GET' })).status).toBe(403)
  })

  test('serves nothing outside of the page, however the path is written', async () => {
    for (const path of [
      '/../package.json',
      '/%2e%2e/package.json',
      '/..%2fpackage.json',
      '/assets/%00',
      '//etc/passwd',
    ]) {
      expect([path, (await ask({ path, method: 'GET' })).status]).toEqual([path, 404])
    }
  })

  test('explains a body that is no request, and an operation that there is not', async () => {
    host = await startWebHost(testApplication().application)
    const headers = { 'x-tallycut-token': tokenOf(host.url) }
    const unknown = await ask({ path: '/api/projects.burn', headers })
    expect(decodeWire(unknown.body)).toMatchObject({ ok: false })
    const wrong = await ask({ path: '/api/projects.open', headers, body: { path: 7 } })
    expect(decodeWire(wrong.body)).toMatchObject({ ok: false, error: { code: 'bad-input' } })
  })

  test('listens on this machine alone', async () => {
    host = await startWebHost(testApplication().application)
    expect(new URL(host.url).hostname).toBe('127.0.0.1')
  })
})
