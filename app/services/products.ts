import { randomUUID } from 'node:crypto'
import { AppError } from '../contract/errors.ts'
import type { Handlers } from '../contract/handlers.ts'
import { changeValues, contradictionsOf } from './assumptions.ts'
import type { EventHub } from './event-hub.ts'
import { found, type Session } from './session.ts'

export function createProducts(
  session: Session,
  events: EventHub,
  now: () => number,
): Pick<
  Handlers,
  'products.get' | 'products.create' | 'products.update' | 'products.delete' | 'undo.restore'
> {
  const changed = (productId: number | null): void => events.emit('changed', { noun: 'product', productId })
  return {
    'products.get': ({ id }) => {
      const { products, netlists, patternSets, runs, budgets } = session.store()
      return {
        product: found(products.get(id)),
        netlists: netlists.listOf(id),
        patternSets: patternSets.listOf(id),
        runs: runs.listOf(id),
        budgets: budgets.listOf(id),
      }
    },
    'products.create': ({ name }) => {
      const { products, testers } = session.writable()
      const id = products.create(name, now())
      const product = found(products.get(id))
      const [tester] = testers.list()
      if (tester !== undefined) products.update({ ...product, testerId: tester.id })
      changed(id)
      return found(products.get(id))
    },
    'products.update': ({ id, name, note, values, limits, testerId }) => {
      const { products, testers } = session.writable()
      const product = found(products.get(id))
      if (testerId !== undefined && testerId !== null) found(testers.get(testerId))
      const { values: next, errors } = changeValues('product', product.values, values ?? {})
      products.update({
        ...product,
        name: name ?? product.name,
        note: note ?? product.note,
        limits: limits ?? product.limits,
        testerId: testerId === undefined ? product.testerId : testerId,
        values: next,
      })
      changed(id)
      return {
        product: found(products.get(id)),
        fieldErrors: [...errors, ...contradictionsOf('product', next)],
      }
    },
    'products.delete': ({ id }) => {
      const { products, runs, trash } = session.writable()
      found(products.get(id))
      if (runs.listOf(id).some(({ state }) => state === 'running' || state === 'queued')) {
        throw new AppError('in-use', 'A run of this product is under way. Cancel it first.')
      }
      const undoToken = randomUUID()
      trash.remove('product', id, undoToken)
      changed(id)
      return { undoToken }
    },
    'undo.restore': ({ undoToken }) => {
      const { trash } = session.writable()
      if (!trash.restore(undoToken)) throw new AppError('not-found', 'That can no longer be brought back.')
      events.emit('changed', { noun: 'project', productId: null })
      return {}
    },
  }
}
