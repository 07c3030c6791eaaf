import type { Handlers } from '../contract/handlers.ts'
import type { Settings } from '../contract/operations.ts'
import type { EventHub } from './event-hub.ts'

/** What is kept of a user between sessions, in a file of their own. */
export type UserState = {
  readonly settings: Settings
  readonly recent: readonly {
    readonly path: string
    readonly name: string
    readonly openedAtMs: number
    readonly summary: string
  }[]
}

/** Where that is kept. */
export type UserStateFile = { read(): UserState; write(state: UserState): void }

const DEFAULT_SETTINGS: Settings = { theme: 'system', singleKeys: true, zoom: 1 }

/** Returns a user's state from what a file holds: whatever it does not say has its default. */
export function parseUserState(found: unknown): UserState {
  const state = (found ?? {}) as Partial<UserState>
  return { settings: { ...DEFAULT_SETTINGS, ...state.settings }, recent: state.recent ?? [] }
}

export function createSettings(
  file: UserStateFile,
  events: EventHub,
): Pick<Handlers, `settings.${string}` & keyof Handlers> {
  return {
    'settings.get': () => file.read().settings,
    'settings.set': (changes) => {
      const state = file.read()
      const settings = { ...state.settings, ...withoutUndefined(changes) }
      file.write({ ...state, settings })
      events.emit('changed', { noun: 'settings', productId: null })
      return settings
    },
  }
}

function withoutUndefined(changes: {
  readonly [K in keyof Settings]?: Settings[K] | undefined
}): Partial<Settings> {
  return Object.fromEntries(Object.entries(changes).filter(([, value]) => value !== undefined))
}
