import { ERROR_MESSAGES, type Result } from '../../app/contract/errors.ts'
import type { EventName, EventPayload } from '../../app/contract/events.ts'
import { decodeWire, encodeWire } from '../../app/contract/wire.ts'
import type { Door } from './door.ts'

const TOKEN_KEY = 'tallycut-token'

const UNREACHABLE: Result<never> = {
  ok: false,
  error: {
    code: 'internal',
    message:
      'Tallycut does not answer any more. What was saved is kept. Start it again and open the address that it prints.',
  },
}

/** Returns the door over HTTP. The token comes with the address once, and is taken out of it for the session. */
export function httpDoor(): Door {
  const token = takeToken()
  const reachable = new Set<(isReachable: boolean) => void>()
  let source: EventSource | null = null

  function events(): EventSource {
    if (source) return source
    source = new EventSource(`api/events?token=${encodeURIComponent(token)}`)
    source.addEventListener('open', () => reachable.forEach((listener) => listener(true)))
    source.addEventListener('error', () => reachable.forEach((listener) => listener(false)))
    return source
  }

  return {
    kind: 'browser',
    chooseProject: null,
    pathOf: () => null,
    async call(name, input) {
      try {
        const response = await fetch(`api/${name}`, {
          method: 'POST',
          headers: { 'content-type': 'application/octet-stream', 'x-tallycut-token': token },
          body: encodeWire(input),
        })
        return decodeWire(new Uint8Array(await response.arrayBuffer())) as Result<unknown>
      } catch (error) {
        if (error instanceof RangeError || error instanceof SyntaxError) {
          return { ok: false, error: { code: 'internal', message: ERROR_MESSAGES.internal } }
        }
        return UNREACHABLE
      }
    },
    on<N extends EventName>(name: N, listener: (payload: EventPayload<N>) => void) {
      const hear = (event: MessageEvent<string>): void => listener(JSON.parse(event.data) as EventPayload<N>)
      events().addEventListener(name, hear)
      return () => source?.removeEventListener(name, hear)
    },
    onReachable(listener) {
      reachable.add(listener)
      return () => reachable.delete(listener)
    },
  }
}

function takeToken(): string {
  const url = new URL(location.href)
  const given = url.searchParams.get('token')
  if (given === null) return sessionStorage.getItem(TOKEN_KEY) ?? ''
  sessionStorage.setItem(TOKEN_KEY, given)
  url.searchParams.delete('token')
  history.replaceState(history.state, '', url)
  return given
}
