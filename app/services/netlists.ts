import { randomUUID } from 'node:crypto'
import { AppError } from '../contract/errors.ts'
import type { Handlers } from '../contract/handlers.ts'
import type { NetlistInspection } from '../contract/shapes/netlist.ts'
import type { Desk } from '../workers/desk.ts'
import type { EventHub } from './event-hub.ts'
import type { FileStore, GivenFile } from './files.ts'
import { found, type Session } from './session.ts'
import { readingOutcome } from './reading-outcome.ts'
import { sourcesHash, withRoles } from './source-files.ts'
import type { Tasks } from './tasks.ts'

type Held = {
  readonly inspection: NetlistInspection
  readonly files: GivenFile[]
  readonly libraries: GivenFile[]
}

/** How many readings are kept for saving; a user looks at one at a time. */
const HELD = 4

export function createNetlists(options: {
  readonly session: Session
  readonly events: EventHub
  readonly tasks: Tasks
  readonly files: FileStore
  readonly desk: Desk
  readonly now: () => number
}): Pick<Handlers, 'netlists.inspect' | 'netlists.save' | 'netlists.update' | 'netlists.delete'> {
  const { session, events, tasks, files, desk, now } = options
  const held = new Map<string, Held>()
  const changed = (productId: number): void => events.emit('changed', { noun: 'netlist', productId })

  return {
    'netlists.inspect': ({ fileIds, libraryFileIds, top, testPins, assumeScanned }) => {
      const given = files.take(fileIds)
      const libraries = files.take(libraryFileIds)
      const names = given.map(({ name }) => name)
      return tasks.run(
        { kind: 'import', title: `Reading ${names.join(', ')}` },
        async ({ signal, report }) => {
          const { account, diagnostics } = await desk.run(
            'read-netlist',
            { files: given, libraries, top, testPins, assumeScanned },
            { signal, onProgress: report },
          )
          const inspection = {
            inspectionId: randomUUID(),
            files: names,
            account,
            diagnostics: [...diagnostics],
          }
          held.set(inspection.inspectionId, { inspection, files: given, libraries })
          for (const old of [...held.keys()].slice(0, -HELD)) held.delete(old)
          return inspection
        },
        readingOutcome,
      )
    },
    'netlists.save': async ({ productId, inspectionId, name, note }) => {
      const store = session.writable()
      found(store.products.get(productId))
      const { inspection, files: given, libraries } = found(held.get(inspectionId) ?? null)
      const { account, diagnostics } = inspection
      if (account === null)
        throw new AppError('bad-file', 'The netlist has errors, so there is nothing to save.')
      const kept = await desk.run('compress', { files: [...given, ...libraries] })
      if (session.current() !== store) throw new AppError('no-project')
      const sources = withRoles(kept, (at) => (at < given.length ? 'netlist' : 'library'))
      const id = store.netlists.create({
        productId,
        name,
        note,
        createdAtMs: now(),
        sha256: sourcesHash(sources),
        account,
        warnings: diagnostics.filter(({ severity }) => severity === 'warning').length,
        sources,
      })
      held.delete(inspectionId)
      changed(productId)
      return found(store.netlists.get(id))
    },
    'netlists.update': ({ id, name, note }) => {
      const { netlists } = session.writable()
      const revision = found(netlists.get(id))
      netlists.rename(id, name ?? revision.name, note ?? revision.note)
      changed(revision.productId)
      return found(netlists.get(id))
    },
    'netlists.delete': ({ id }) => {
      const { netlists, runs, trash } = session.writable()
      const { productId } = found(netlists.get(id))
      const isBusy = runs.listOf(productId).some((run) => run.netlistId === id && isUnderWay(run.state))
      if (isBusy) throw new AppError('in-use', 'A run on this netlist is under way. Cancel it first.')
      const undoToken = randomUUID()
      trash.remove('netlist', id, undoToken)
      changed(productId)
      return { undoToken }
    },
  }
}

export function isUnderWay(state: string): boolean {
  return state === 'queued' || state === 'running'
}
