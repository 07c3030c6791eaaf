import { createHash, randomBytes, timingSafeEqual } from 'node:crypto'
import { createServer, type IncomingMessage, type ServerResponse } from 'node:http'
import type { AddressInfo } from 'node:net'
import type { Application } from '../compose.ts'
import { AppError, ERROR_MESSAGES, type ErrorCode, type Result } from '../contract/errors.ts'
import { decodeWire, encodeWire } from '../contract/wire.ts'

export type WebHost = {
  readonly port: number
  /** The address of the page, with the token that lets it in. */
  readonly url: string
  close(): Promise<void>
}

const HOST = '127.0.0.1'
const MAX_BODY_BYTES = 512 * 1024 * 1024
const HEARTBEAT_MS = 15_000

/**
 * Serves the application to this machine's browser: the page, `POST /api/<operation>` and `GET /api/events`. Every start has
 * a token of its own; whoever has it may do all that the user may. The Host and Origin that a browser tells must be ours, so
 * that no other page can reach in, whatever its name resolves to. Port 0 takes any that is free.
 */
export async function startWebHost(application: Application, port: number = 0): Promise<WebHost> {
  const token = randomBytes(32).toString('base64url')
  const streams = new Set<ServerResponse>()
  let origins: readonly string[] = []

  const server = createServer((request, response) => {
    answer(request, response).catch((error: unknown) => {
      if (response.headersSent) response.destroy()
      else refuse(response, 500, 'internal', error instanceof Error ? error.message : undefined)
    })
  })
  await new Promise<void>((done, fail) => {
    server.once('error', fail)
    server.listen(port, HOST, done)
  })
  const taken = (server.address() as AddressInfo).port
  origins = [`http://${HOST}:${taken}`, `http://localhost:${taken}`]

  const unsubscribe = application.events.subscribe(({ name, payload }) => {
    for (const stream of streams) stream.write(`event: ${name}\ndata: ${JSON.stringify(payload)}\n\n`)
  })
  const heartbeat = setInterval(() => {
    for (const stream of streams) stream.write(':\n\n')
  }, HEARTBEAT_MS)
  heartbeat.unref()

  return {
    port: taken,
    url: `${origins[0]}/?token=${token}`,
    close: () =>
      new Promise((done) => {
        clearInterval(heartbeat)
        unsubscribe()
        for (const stream of streams) stream.end()
        server.close(() => done())
        server.closeAllConnections()
      }),
  }

  async function answer(request: IncomingMessage, response: ServerResponse): Promise<void> {
    const { host, origin } = request.headers
    if (!origins.includes(`http://${host}`)) return refuse(response, 403, 'not-allowed')
    if (origin !== undefined && !origins.includes(origin)) return refuse(response, 403, 'not-allowed')
    const url = new URL(request.url ?? '/', origins[0])
    if (!url.pathname.startsWith('/api/')) return answerPage(request, response, url.pathname)
    if (url.pathname === '/api/events' && request.method === 'GET') {
      if (!isToken(url.searchParams.get('token'))) return refuse(response, 403, 'not-allowed')
      return openStream(response)
    }
    if (!isToken(request.headers['x-tallycut-token'])) return refuse(response, 403, 'not-allowed')
    if (request.method !== 'POST') return refuse(response, 405, 'not-allowed')
    let input: unknown
    try {
      input = decodeWire(await bodyOf(request))
    } catch (error) {
      if (error instanceof AppError) return refuse(response, 413, error.code, error.message)
      return refuse(response, 400, 'bad-input')
    }
    send(response, 200, await application.dispatch(url.pathname.slice('/api/'.length), input))
  }

  async function answerPage(request: IncomingMessage, response: ServerResponse, path: string): Promise<void> {
    if (request.method !== 'GET' && request.method !== 'HEAD') return refuse(response, 405, 'not-allowed')
    const file = await application.page(path)
    if (file === null) return refuse(response, 404, 'not-found')
    response.writeHead(200, file.headers)
    response.end(request.method === 'HEAD' ? undefined : file.bytes)
  }

  function openStream(response: ServerResponse): void {
    response.writeHead(200, {
      'content-type': 'text/event-stream',
      'cache-control': 'no-store',
      'x-content-type-options': 'nosniff',
    })
    response.write('retry: 1000\n\n')
    streams.add(response)
    response.on('close', () => streams.delete(response))
  }

  function isToken(given: unknown): boolean {
    const digest = (text: string): Buffer => createHash('sha256').update(text).digest()
    return typeof given === 'string' && timingSafeEqual(digest(given), digest(token))
  }
}

async function bodyOf(request: IncomingMessage): Promise<Uint8Array> {
  const tooLarge = new AppError(
    'bad-input',
    `At most ${MAX_BODY_BYTES / 1024 / 1024} MB can be sent at once.`,
  )
  if (Number(request.headers['content-length'] ?? 0) > MAX_BODY_BYTES) throw tooLarge
  const parts: Buffer[] = []
  let size = 0
  for await (const part of request as AsyncIterable<Buffer>) {
    size += part.length
    if (size > MAX_BODY_BYTES) throw tooLarge
    parts.push(part)
  }
  return Buffer.concat(parts, size)
}

function refuse(response: ServerResponse, status: number, code: ErrorCode, message?: string): void {
  send(response, status, { ok: false, error: { code, message: message ?? ERROR_MESSAGES[code] } })
}

function send(response: ServerResponse, status: number, result: Result<unknown>): void {
  response.writeHead(status, {
    'content-type': 'application/octet-stream',
    'cache-control': 'no-store',
    'x-content-type-options': 'nosniff',
  })
  response.end(encodeWire(result))
}
