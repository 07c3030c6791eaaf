import type { Result } from '../../app/contract/errors.ts'
import type { EventName, EventPayload } from '../../app/contract/events.ts'
import type { OperationName } from '../../app/contract/operations.ts'

export type Listener<N extends EventName> = (payload: EventPayload<N>) => void

/** The way to the host: the desktop window's bridge, or HTTP on loopback. */
export type Door = {
  readonly kind: 'window' | 'browser'
  call(name: OperationName, input: unknown): Promise<Result<unknown>>
  /** Returns what ends the subscription. */
  on<N extends EventName>(name: N, listener: Listener<N>): () => void
  /** Tells when the host stops and starts answering. */
  onReachable(listener: (isReachable: boolean) => void): () => void
  /** Asks with the system's own dialog for a project file; null where the door has none. */
  readonly chooseProject: (() => Promise<string | null>) | null
  /** The path of a dropped or chosen file; null where the door can't tell. */
  pathOf(file: File): string | null
}
