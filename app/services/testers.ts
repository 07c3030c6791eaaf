import { randomUUID } from 'node:crypto'
import type { Handlers } from '../contract/handlers.ts'
import { changeValues, contradictionsOf, formFields } from './assumptions.ts'
import type { EventHub } from './event-hub.ts'
import { found, type Session } from './session.ts'

export function createTesters(
  session: Session,
  events: EventHub,
  now: () => number,
): Pick<Handlers, 'fields.get' | 'testers.list' | 'testers.create' | 'testers.update' | 'testers.delete'> {
  const changed = (): void => events.emit('changed', { noun: 'tester', productId: null })
  return {
    'fields.get': () => formFields(),
    'testers.list': () => ({ testers: session.store().testers.list() }),
    'testers.create': ({ name, values }) => {
      const { testers } = session.writable()
      const id = testers.create(name, changeValues('tester', {}, values).values, now())
      changed()
      return found(testers.get(id))
    },
    'testers.update': ({ id, name, note, values }) => {
      const { testers } = session.writable()
      const tester = found(testers.get(id))
      const { values: next, errors } = changeValues('tester', tester.values, values ?? {})
      testers.update({ id, name: name ?? tester.name, note: note ?? tester.note, values: next })
      changed()
      return { tester: found(testers.get(id)), fieldErrors: [...errors, ...contradictionsOf('tester', next)] }
    },
    'testers.delete': ({ id }) => {
      const { testers, trash } = session.writable()
      found(testers.get(id))
      const undoToken = randomUUID()
      trash.remove('tester', id, undoToken)
      changed()
      return { undoToken }
    },
  }
}
