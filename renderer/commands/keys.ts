import type { Door } from '../api/door.ts'

/** Keys that belong to the browser when held with Ctrl; there Alt with the same key does it. */
const BROWSER_OWNS = /^Mod\+([1-9]|R|B)$/

const NAMES: Readonly<Record<string, string>> = {
  ArrowUp: '↑',
  ArrowDown: '↓',
  ArrowLeft: '←',
  ArrowRight: '→',
  '-': '−',
}

export const isMac: boolean = navigator.platform.startsWith('Mac')

/** Returns the keys as they are at this door, such as `Mod+K`, `Alt+1`, `Shift+F6` or `C`. */
export function keysAt(keys: string, door: Door['kind']): string {
  return door === 'browser' ? keys.replace(BROWSER_OWNS, 'Alt+$1') : keys
}

/** Returns keys as people read them: `Ctrl K`. */
export function keysShown(keys: string): string {
  return partsOf(keys)
    .map((part) => (part === 'Mod' ? (isMac ? '⌘' : 'Ctrl') : (NAMES[part] ?? part)))
    .join(' ')
}

/** Returns keys in the form of `aria-keyshortcuts`. */
export function keysForAria(keys: string): string {
  return partsOf(keys)
    .map((part) => (part === 'Mod' ? (isMac ? 'Meta' : 'Control') : part === '+' ? 'Plus' : part))
    .join('+')
}

/** Returns what was pressed in the table's form; what Shift does to a sign is in the sign itself. */
export function keysOf(event: KeyboardEvent): string {
  const held = [...((isMac ? event.metaKey : event.ctrlKey) ? ['Mod'] : []), ...(event.altKey ? ['Alt'] : [])]
  // Alt makes other signs of letters and digits on some layouts: the key's place is meant then.
  const placed = event.altKey ? /^(?:Digit|Key)(.)$/.exec(event.code)?.[1] : undefined
  const key = placed ?? (event.key.length === 1 ? event.key.toUpperCase() : event.key)
  const isSign = key.length === 1 && !/[A-Z]/.test(key)
  if (event.shiftKey && !isSign) held.push('Shift')
  return [...held, key].join('+')
}

function partsOf(keys: string): string[] {
  if (keys === '+') return ['+']
  return keys.split('+')
}
