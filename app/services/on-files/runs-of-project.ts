import type { ProjectStore } from '../../../db/open-project.ts'
import { AppError } from '../../contract/errors.ts'
import type { Run } from '../../contract/shapes/run.ts'
import { buildFaultList } from '../../engine/faults/build-fault-list.ts'
import { DEFAULT_TESTER } from '../../engine/tester/tester.ts'
import { readNetlistInput } from '../../workers/load-netlist.ts'
import { unpackPatterns } from '../../workers/packed-patterns.ts'
import { ProfileSum, unpackSegment } from '../../workers/run-segment.ts'
import { resolveProduct, resolveTester } from '../assumptions.ts'
import { found } from '../session.ts'
import { storedNetlist, storedPatterns, storedSegments } from '../stored-inputs.ts'
import type { MeasuredSet } from './compare-sets.ts'
import { progressOf, throwIfCancelled, type FileWork } from './file-work.ts'
import type { NetlistOfFiles } from './read-netlist-files.ts'

/**
 * Returns finished runs of a project, each named by its number, or as PRODUCT/NUMBER where the project has several
 * products. Throws AppError 'bad-input' for a run that is not there or not finished, 'damaged-project', 'cancelled'.
 */
export async function runsOfProject(
  store: ProjectStore,
  names: readonly string[],
  work: FileWork,
): Promise<MeasuredSet[]> {
  const netlists = new Map<number, NetlistOfFiles>()
  const sets: MeasuredSet[] = []
  for (const name of names) {
    const run = findRun(store, name)
    const read = netlists.get(run.netlistId) ?? (await readNetlist(store, run.netlistId, work))
    netlists.set(run.netlistId, read)
    sets.push(await measuredSet(store, run, read, work))
  }
  return sets
}

function findRun(store: ProjectStore, name: string): Run {
  const products = store.products.summaries()
  const [, product, number] = /^(?:(.*)\/)?(\d+)$/.exec(name) ?? []
  const meant = products.filter((one) => product === undefined || one.name === product)
  const runs = meant.flatMap(({ id }) => store.runs.listOf(id))
  const matches = runs.filter((run) => run.number === Number(number))
  const [run] = matches
  if (run === undefined || matches.length > 1) {
    const all = products.flatMap((one) =>
      store.runs.listOf(one.id).map((each) => `${one.name}/${each.number}`),
    )
    const why = matches.length > 1 ? `"${name}" is a run of several products` : `There is no run "${name}"`
    throw new AppError('bad-input', `${why}. Runs of the project: ${all.join(', ') || 'none'}.`)
  }
  if (run.state !== 'done') {
    throw new AppError(
      'bad-input',
      `Run ${name} is not finished: it is ${run.state}. Finish it in the application first.`,
    )
  }
  return run
}

async function measuredSet(
  store: ProjectStore,
  run: Run,
  { netlist, faults }: NetlistOfFiles,
  work: FileWork,
): Promise<MeasuredSet> {
  const { netlistId, patternSetId, productId, detectionLimit } = run
  const patterns = unpackPatterns(storedPatterns(store, patternSetId))
  const sum = new ProfileSum(faults.nClasses, detectionLimit)
  for (const segment of await storedSegments(store, run.id)) sum.add(unpackSegment(segment))
  throwIfCancelled(work)
  const record = found(store.products.get(productId))
  const tester = record.testerId === null ? null : store.testers.get(record.testerId)
  return {
    name: `run ${run.number}: ${found(store.patternSets.get(patternSetId)).name} on ${found(store.netlists.get(netlistId)).name}`,
    netlist,
    faults,
    patterns,
    profile: sum.profile(),
    product: resolveProduct(record.name, record.values).values,
    tester: tester === null ? DEFAULT_TESTER : resolveTester(tester.name, tester.values).values,
  }
}

async function readNetlist(store: ProjectStore, netlistId: number, work: FileWork): Promise<NetlistOfFiles> {
  const { netlist: input } = storedNetlist(store, netlistId)
  const { reading } = await readNetlistInput(input, progressOf(work, 'Reading the netlist'))
  throwIfCancelled(work)
  if (reading.value === null) {
    throw new AppError('damaged-project', 'The netlist that is kept in the project can no longer be read.')
  }
  return { netlist: reading.value, faults: buildFaultList(reading.value.circuit) }
}
