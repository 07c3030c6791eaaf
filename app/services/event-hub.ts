import type { EventName, EventPayload } from '../contract/events.ts'

export type AppEvent = {
  [N in EventName]: { readonly name: N; readonly payload: EventPayload<N> }
}[EventName]

export type EventHub = {
  emit<N extends EventName>(name: N, payload: EventPayload<N>): void
  /** Returns what ends the subscription. */
  subscribe(listener: (event: AppEvent) => void): () => void
}

/** Tells whoever listens what happened. */
export function createEventHub(): EventHub {
  const listeners = new Set<(event: AppEvent) => void>()
  return {
    emit(name, payload) {
      for (const listener of listeners) listener({ name, payload } as AppEvent)
    },
    subscribe(listener) {
      listeners.add(listener)
      return () => listeners.delete(listener)
    },
  }
}
