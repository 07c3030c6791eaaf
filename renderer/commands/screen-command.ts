import { screenAction } from './screen-actions.ts'
import { useCommands, type CommandId } from './commands.ts'

/** Returns what a button needs to carry out a command of the table: why it can't be used, and what a press does. */
export function screenActionOf(id: CommandId): { blockedBy: string | null; onClick: () => void } {
  const command = useCommands().find((each) => each.id === id)
  return {
    blockedBy: screenAction(id)?.blockedBy?.() ?? command?.blockedBy() ?? null,
    onClick: () => command?.run(),
  }
}
