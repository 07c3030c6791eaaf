import { randomUUID } from 'node:crypto'
import { AppError } from '../contract/errors.ts'
import type { Handlers } from '../contract/handlers.ts'
import type { PatternInspection } from '../contract/shapes/pattern-set.ts'
import type { Desk } from '../workers/desk.ts'
import type { EventHub } from './event-hub.ts'
import type { FileStore, GivenFile } from './files.ts'
import { isUnderWay } from './netlists.ts'
import { found, type Session } from './session.ts'
import { readingOutcome } from './reading-outcome.ts'
import { sourcesHash, withRoles } from './source-files.ts'
import { storedNetlist } from './stored-inputs.ts'
import type { Tasks } from './tasks.ts'

type Held = {
  readonly inspection: PatternInspection
  readonly netlistId: number
  readonly files: GivenFile[]
  readonly packed: readonly Uint8Array[]
}

const HELD = 4

export function createPatternSets(options: {
  readonly session: Session
  readonly events: EventHub
  readonly tasks: Tasks
  readonly files: FileStore
  readonly desk: Desk
  readonly now: () => number
}): Pick<Handlers, 'patternSets.inspect' | 'patternSets.save' | 'patternSets.update' | 'patternSets.delete'> {
  const { session, events, tasks, files, desk, now } = options
  const held = new Map<string, Held>()
  const changed = (productId: number): void => events.emit('changed', { noun: 'pattern-set', productId })
  session.onClose(() => held.clear())

  return {
    'patternSets.inspect': ({ netlistId, fileIds }) => {
      const store = session.store()
      const given = files.take(fileIds)
      const names = given.map(({ name }) => name)
      const netlist = storedNetlist(store, netlistId)
      return tasks.run(
        { kind: 'import', title: `Reading ${names.join(', ')}` },
        async ({ signal, report }) => {
          const { account, diagnostics, packed } = await desk.run(
            'read-patterns',
            { ...netlist, files: given },
            { signal, onProgress: report },
          )
          const inspection = {
            inspectionId: randomUUID(),
            files: names,
            account,
            diagnostics: [...diagnostics],
          }
          held.set(inspection.inspectionId, { inspection, netlistId, files: given, packed })
          for (const old of [...held.keys()].slice(0, -HELD)) held.delete(old)
          return inspection
        },
        readingOutcome,
      )
    },
    'patternSets.save': async ({ productId, inspectionId, name, note }) => {
      const store = session.writable()
      const { inspection, netlistId, files: given, packed } = found(held.get(inspectionId) ?? null)
      const { account, diagnostics } = inspection
      if (account === null)
        throw new AppError('bad-file', 'The patterns have errors, so there is nothing to save.')
      const netlist = found(store.netlists.get(netlistId))
      if (netlist.productId !== productId) {
        throw new AppError('bad-input', 'The patterns were read for a netlist of another product.')
      }
      const kept = await desk.run('compress', { files: given })
      if (session.current() !== store) throw new AppError('no-project')
      const sources = withRoles(kept, () => 'patterns')
      const id = store.patternSets.create({
        productId,
        netlistId,
        name,
        note,
        createdAtMs: now(),
        sha256: sourcesHash(sources),
        account,
        warnings: diagnostics.filter(({ severity }) => severity === 'warning').length,
        sources,
        packed,
      })
      held.delete(inspectionId)
      changed(productId)
      return found(store.patternSets.get(id))
    },
    'patternSets.update': ({ id, name, note }) => {
      const { patternSets } = session.writable()
      const revision = found(patternSets.get(id))
      patternSets.rename(id, name ?? revision.name, note ?? revision.note)
      changed(revision.productId)
      return found(patternSets.get(id))
    },
    'patternSets.delete': ({ id }) => {
      const { patternSets, runs, trash } = session.writable()
      const { productId } = found(patternSets.get(id))
      const isBusy = runs.listOf(productId).some((run) => run.patternSetId === id && isUnderWay(run.state))
      if (isBusy) throw new AppError('in-use', 'A run of these patterns is under way. Cancel it first.')
      const undoToken = randomUUID()
      trash.remove('pattern_set', id, undoToken)
      changed(productId)
      return { undoToken }
    },
  }
}
