import type { EventName } from './events.ts'
import type { OperationName } from './operations.ts'

/** Every operation by name, for code that may not load the schemas themselves. */
export const OPERATION_NAMES = [
  'app.info',
  'settings.get',
  'settings.set',
  'files.add',
  'files.drop',
  'projects.recent',
  'projects.current',
  'projects.create',
  'projects.open',
  'projects.close',
  'projects.forget',
  'projects.openDemo',
  'products.get',
  'products.create',
  'products.update',
  'products.delete',
  'fields.get',
  'testers.list',
  'testers.create',
  'testers.update',
  'testers.delete',
  'undo.restore',
  'netlists.inspect',
  'netlists.save',
  'netlists.update',
  'netlists.delete',
  'patternSets.inspect',
  'patternSets.save',
  'patternSets.update',
  'patternSets.delete',
  'runs.start',
  'runs.cancel',
  'runs.resume',
  'runs.delete',
  'runs.curve',
  'budgets.view',
  'budgets.ceiling',
  'budgets.smallest',
  'budgets.improve',
  'budgets.constraintCosts',
  'budgets.save',
  'budgets.update',
  'budgets.delete',
  'budgets.money',
  'faults.lost',
  'exports.make',
  'tasks.list',
  'tasks.cancel',
] as const satisfies readonly OperationName[]

export const EVENT_NAMES = ['task', 'changed'] as const satisfies readonly EventName[]

/** Compiles only while no name is missing above. */
export type EveryName = [
  Exclude<OperationName, (typeof OPERATION_NAMES)[number]>,
  Exclude<EventName, (typeof EVENT_NAMES)[number]>,
] extends [never, never]
  ? true
  : never
export const isEveryName: EveryName = true

/** The IPC channel of an operation or event. */
export function channelOf(name: OperationName | EventName): string {
  return `tallycut:${name}`
}

/** The IPC channel by which a window asks for the system's own dialog. */
export const CHOOSE_PROJECT = 'tallycut:choose-project'
