import { api } from '../api/client.ts'
import { useDialogs } from '../stores/dialogs.ts'
import { useSettings } from '../stores/settings.ts'
import type { Command } from './commands.ts'
import { keysAt, keysOf } from './keys.ts'

/** Carries out commands by their keys; returns what ends that. */
export function listenForKeys(commands: readonly Command[]): () => void {
  const dialogs = useDialogs()
  const settings = useSettings()
  const byKeys = new Map<string, Command[]>()
  for (const command of commands) {
    if (command.keys === null) continue
    const keys = keysAt(command.keys, api.kind)
    byKeys.set(keys, [...(byKeys.get(keys) ?? []), command])
  }

  function hear(event: KeyboardEvent): void {
    if (event.defaultPrevented || event.isComposing || dialogs.open !== null) return
    const target = event.target instanceof Element ? event.target : null
    const isSingle = event.key.length === 1 && !event.ctrlKey && !event.metaKey && !event.altKey
    if (isSingle && (!settings.settings.singleKeys || isEditable(target))) return
    if (target?.closest('dialog, [role=menu]')) return
    const isInScope = (scope: Command['scope']): boolean =>
      scope === 'anywhere' || Boolean(target?.closest(`[data-key-scope="${scope}"]`))
    const command = byKeys
      .get(keysOf(event))
      ?.find(({ scope, blockedBy }) => isInScope(scope) && blockedBy() === null)
    if (!command) return
    // Undo of what is being typed belongs to the field.
    if ((command.id === 'undo' || command.id === 'redo') && isEditable(target)) return
    event.preventDefault()
    command.run()
  }

  window.addEventListener('keydown', hear)
  return () => window.removeEventListener('keydown', hear)
}

function isEditable(element: Element | null): boolean {
  const fields = 'input:not([type=checkbox], [type=radio], [type=range]), textarea, select, [contenteditable]'
  return Boolean(element?.closest(fields))
}
