import { afterEach, beforeEach, expect, test, vi } from 'vitest'
import { keysAt, keysForAria, keysOf, keysShown } from '../../../renderer/commands/keys.ts'
import type { Command } from '../../../renderer/commands/commands.ts'
import { useCommands } from '../../../renderer/commands/commands.ts'
import { listenForKeys } from '../../../renderer/commands/listen-for-keys.ts'
import { useDialogs } from '../../../renderer/stores/dialogs.ts'
import { useSettings } from '../../../renderer/stores/settings.ts'
import { fakeApi } from '../../helpers/fake-api.ts'

let stop = (): void => undefined
beforeEach(() => void fakeApi())
afterEach(() => {
  stop()
  document.body.innerHTML = ''
})

const run = vi.fn()
const command = (keys: string, change: Partial<Command> = {}): Command => ({
  id: 'find',
  label: '',
  group: 'Window',
  keys,
  scope: 'anywhere',
  blockedBy: () => null,
  run,
  ...change,
})

/** How often the commands ran when a key was pressed in an element. */
function runs(
  commands: readonly Command[],
  init: KeyboardEventInit,
  target: Element = document.body,
): number {
  stop()
  stop = listenForKeys(commands)
  run.mockClear()
  target.dispatchEvent(new KeyboardEvent('keydown', { bubbles: true, cancelable: true, ...init }))
  return run.mock.calls.length
}

function add(html: string, find: string): Element {
  document.body.innerHTML = html
  return document.querySelector(find)!
}

test('what is pressed has one spelling', () => {
  const press = (init: KeyboardEventInit): string => keysOf(new KeyboardEvent('keydown', init))
  expect(press({ key: 'k', ctrlKey: true })).toBe('Mod+K')
  expect(press({ key: 'Z', ctrlKey: true, shiftKey: true })).toBe('Mod+Shift+Z')
  expect(press({ key: '?', shiftKey: true })).toBe('?')
  expect(press({ key: 'F6', shiftKey: true })).toBe('Shift+F6')
  expect(press({ key: '¡', code: 'Digit1', altKey: true })).toBe('Alt+1')
})

test('keys of the browser go with Alt there', () => {
  expect(keysAt('Mod+2', 'browser')).toBe('Alt+2')
  expect(keysAt('Mod+R', 'browser')).toBe('Alt+R')
  expect(keysAt('Mod+2', 'window')).toBe('Mod+2')
  expect(keysAt('Mod+K', 'browser')).toBe('Mod+K')
})

test('keys are shown and announced in their own forms', () => {
  expect(keysShown('Mod+K')).toBe('Ctrl K')
  expect(keysShown('-')).toBe('−')
  expect(keysForAria('Mod+Shift+Z')).toBe('Control+Shift+Z')
  expect(keysForAria('+')).toBe('Plus')
})

test('single letters rest while something is typed, and where they are turned off', () => {
  const field = add('<input type="text"><input type="checkbox">', 'input')
  expect(runs([command('C')], { key: 'c' })).toBe(1)
  expect(runs([command('C')], { key: 'c' }, field)).toBe(0)
  expect(runs([command('C')], { key: 'c' }, document.querySelector('[type=checkbox]')!)).toBe(1)
  useSettings().settings.singleKeys = false
  expect(runs([command('C')], { key: 'c' })).toBe(0)
})

test('keys with Ctrl act in a field, but undoing what is typed is left to it', () => {
  const field = add('<input type="text">', 'input')
  expect(runs([command('Mod+K')], { key: 'k', ctrlKey: true }, field)).toBe(1)
  expect(runs([command('Mod+Z', { id: 'undo' })], { key: 'z', ctrlKey: true }, field)).toBe(0)
  expect(runs([command('Mod+Z', { id: 'undo' })], { key: 'z', ctrlKey: true })).toBe(1)
})

test("a chart's keys act in a chart alone", () => {
  const chart = add('<div data-key-scope="chart"><button></button></div>', 'button')
  const commands = [command('S', { scope: 'chart' })]
  expect(runs(commands, { key: 's' }, chart)).toBe(1)
  expect(runs(commands, { key: 's' })).toBe(0)
})

test('nothing acts behind a dialog, nor what is blocked', () => {
  expect(runs([command('C', { blockedBy: () => 'Not now' })], { key: 'c' })).toBe(0)
  useDialogs().show({ kind: 'shortcuts' })
  expect(runs([command('C')], { key: 'c' })).toBe(0)
})

test('no two commands share their keys, in a window or in a browser', () => {
  for (const door of ['window', 'browser'] as const) {
    const keys = useCommands().flatMap((each) => (each.keys === null ? [] : [keysAt(each.keys, door)]))
    expect(keys.filter((each, at) => keys.indexOf(each) !== at)).toEqual([])
  }
})

test('without a project, what needs one says so', () => {
  const blocked = Object.fromEntries(useCommands().map(({ id, blockedBy }) => [id, blockedBy()]))
  expect(blocked['go.budget']).toBe('No project is open')
  expect(blocked['product.import']).toBe('No project is open')
  expect(blocked['cut.keep']).toBe('Not on this screen')
  expect(blocked['project.open']).toBeNull()
})
