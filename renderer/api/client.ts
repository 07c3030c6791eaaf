import { AppError } from '../../app/contract/errors.ts'
import type { EventName } from '../../app/contract/events.ts'
import type { InputOf, OperationName, OutputOf } from '../../app/contract/operations.ts'
import type { Door, Listener } from './door.ts'
import { httpDoor } from './http-door.ts'
import { hasWindowDoor, windowDoor } from './window-door.ts'

let door: Door | null = null

/** Uses a door of the caller's, such as a test's. */
export function useDoor(own: Door): void {
  door = own
}

function currentDoor(): Door {
  door ??= hasWindowDoor() ? windowDoor() : httpDoor()
  return door
}

/** The application behind the window: one call for every operation of the contract, and its events. */
export const api = {
  /** Returns the operation's answer; throws AppError where the answer is no. */
  async call<N extends OperationName>(name: N, input: InputOf<N>): Promise<OutputOf<N>> {
    const result = await currentDoor().call(name, input)
    if (!result.ok) throw new AppError(result.error.code, result.error.message, result.error.details)
    return result.value as OutputOf<N>
  },
  on<N extends EventName>(name: N, listener: Listener<N>): () => void {
    return currentDoor().on(name, listener)
  },
  onReachable: (listener: (isReachable: boolean) => void) => currentDoor().onReachable(listener),
  pathOf: (file: File) => currentDoor().pathOf(file),
  get chooseProject() {
    return currentDoor().chooseProject
  },
  get kind() {
    return currentDoor().kind
  },
}
