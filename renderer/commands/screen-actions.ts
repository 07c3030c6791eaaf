import { onUnmounted, shallowReactive } from 'vue'
import type { CommandId } from './commands.ts'

export type ScreenAction = {
  readonly run: () => void
  /** Why it can't be done now; null where it can. */
  readonly blockedBy?: () => string | null
}

export type ScreenActions = Partial<Record<CommandId, ScreenAction>>

const actions = shallowReactive(new Map<CommandId, ScreenAction>())

/** What the screen that is shown does for a command; undefined where it does nothing for it. */
export function screenAction(id: CommandId): ScreenAction | undefined {
  return actions.get(id)
}

/** Lets the component that calls it carry out commands of the table for as long as it is shown. */
export function useScreenActions(own: ScreenActions): void {
  const entries = Object.entries(own) as [CommandId, ScreenAction][]
  for (const [id, action] of entries) actions.set(id, action)
  onUnmounted(() => {
    for (const [id, action] of entries) if (actions.get(id) === action) actions.delete(id)
  })
}
