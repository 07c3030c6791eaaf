import type { Result } from '../../app/contract/errors.ts'
import type { EventName, EventPayload } from '../../app/contract/events.ts'
import type { OperationName } from '../../app/contract/operations.ts'
import type { Door } from './door.ts'

/** What the preload script puts on the window: a function for each operation and a few things only a window can do. */
export type WindowBridge = {
  readonly operations: Readonly<Record<OperationName, (input: unknown) => Promise<Result<unknown>>>>
  readonly on: <N extends EventName>(name: N, listener: (payload: EventPayload<N>) => void) => () => void
  readonly chooseProject?: () => Promise<string | null>
  readonly pathOf?: (file: File) => string
}

declare global {
  interface Window {
    readonly api?: WindowBridge
  }
}

export function hasWindowDoor(): boolean {
  return window.api !== undefined
}

/** Returns the door through the desktop window's bridge. */
export function windowDoor(): Door {
  const bridge = window.api
  if (!bridge) throw new Error('there is no bridge in this window')
  return {
    kind: 'window',
    call: (name, input) => bridge.operations[name](input),
    on: (name, listener) => bridge.on(name, listener),
    onReachable: () => () => undefined,
    chooseProject: bridge.chooseProject ?? null,
    pathOf: (file) => bridge.pathOf?.(file) || null,
  }
}
