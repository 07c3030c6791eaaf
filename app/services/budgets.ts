import { randomUUID } from 'node:crypto'
import { AppError } from '../contract/errors.ts'
import { numberFormats } from '../contract/format-number.ts'
import type { Handlers } from '../contract/handlers.ts'
import { counted } from '../contract/plan-words.ts'
import type { OrderName, Smallest as SmallestFound } from '../contract/shapes/budget.ts'
import type { PlanJobs } from '../workers/plan-jobs.ts'
import type { EventHub } from './event-hub.ts'
import { inputFiles } from './stored-inputs.ts'
import { planGround, runKey, type PlanDesk, type PlanGround } from './plan-desk.ts'
import { found, type Session } from './session.ts'
import type { Tasks } from './tasks.ts'

type Smallest = PlanJobs['find-smallest']['output']
type Ceiling = PlanJobs['prove-ceiling']['output']

/** Answers of long work that are kept at hand. */
const KEPT = 16
/** How long the smallest complete set is looked for where nobody says for how long. */
const SEARCH_SECONDS = 30

const formats = numberFormats('en')
const countOf = (count: number, noun: string): string => counted(count, noun, formats)

/**
 * Plans of finished runs. Views and exports are worked out at one desk, which answers in no time once it has the run;
 * ceilings and smallest sets, which take long, at another.
 */
export function createBudgets(options: {
  readonly session: Session
  readonly events: EventHub
  readonly tasks: Tasks
  readonly planner: PlanDesk
  readonly prover: PlanDesk
  readonly version: string
  readonly now: () => number
}): Pick<
  Handlers,
  | 'budgets.view'
  | 'budgets.ceiling'
  | 'budgets.smallest'
  | 'budgets.improve'
  | 'budgets.constraintCosts'
  | 'budgets.save'
  | 'budgets.update'
  | 'budgets.delete'
  | 'budgets.money'
  | 'faults.lost'
  | 'exports.make'
> {
  const { session, events, tasks, planner, prover, version, now } = options
  const smallestSets = new Map<string, Promise<Smallest>>()
  const ceilings = new Map<string, Promise<Ceiling>>()
  /** The prover has the choices at hand that these constraints are priced by: another cut takes it no time. */
  let pricedConstraints: string | null = null
  const changed = (productId: number): void => events.emit('changed', { noun: 'budget', productId })

  /** Names what long work depends on. */
  const choiceKey = ({ run, assumptions }: PlanGround): string => {
    const { constraints, weights, n } = assumptions
    return JSON.stringify([runKey(session.store(), run), constraints, weights, n])
  }

  /** Does long work once for each choice that it depends on; what failed or was cancelled is forgotten. */
  const once = <T>(kept: Map<string, Promise<T>>, ground: PlanGround, work: () => Promise<T>): Promise<T> => {
    const key = choiceKey(ground)
    const known = kept.get(key)
    if (known !== undefined) return known
    const outcome = work()
    kept.set(key, outcome)
    for (const old of [...kept.keys()].slice(0, -KEPT)) kept.delete(old)
    outcome.catch(() => kept.delete(key))
    return outcome
  }

  const findSmallest = (ground: PlanGround, seconds: number): Promise<Smallest> =>
    tasks.run(
      {
        kind: 'smallest',
        title: `Smallest complete set of run ${ground.run.number}`,
        runId: ground.run.id,
      },
      ({ signal, report }) =>
        prover.ask('find-smallest', ground, { smallest: null, seconds }, { signal, onProgress: report }),
      ({ patterns, lowerBound, proven }) =>
        proven
          ? `${countOf(patterns.length, 'pattern')}, proven`
          : `${countOf(patterns.length, 'pattern')}; no set has fewer than ${formats.count(lowerBound).value}`,
    )

  const smallestFor = async (
    orders: readonly OrderName[],
    ground: PlanGround,
  ): Promise<Uint32Array | null> => {
    if (!orders.includes('smallest')) return null
    return (await once(smallestSets, ground, () => findSmallest(ground, SEARCH_SECONDS))).patterns
  }

  return {
    'budgets.view': async ({ runId, orders, assumptions }) => {
      const ground = planGround(session.store(), runId, assumptions)
      if (ground.errors.length > 0) return { view: null, fieldErrors: [...ground.errors] }
      try {
        const smallest = await smallestFor(orders, ground)
        const view = await planner.ask('view', ground, { orders, smallest })
        const found = smallest === null ? null : await smallestSets.get(choiceKey(ground))
        return {
          view: { runId, ...view, smallest: found ? smallestKnown(found) : null },
          fieldErrors: [],
        }
      } catch (error) {
        const field = fieldOf(error)
        if (field === null) throw error
        return { view: null, fieldErrors: [{ key: field, message: (error as Error).message }] }
      }
    },
    'budgets.ceiling': ({ runId, assumptions }) => {
      const ground = sound(planGround(session.store(), runId, assumptions))
      return once(ceilings, ground, () =>
        tasks.run(
          { kind: 'ceiling', title: `Ceiling of run ${ground.run.number}`, runId },
          ({ signal, report }) =>
            prover.ask('prove-ceiling', ground, { smallest: null }, { signal, onProgress: report }),
          ({ note }) => note,
        ),
      )
    },
    'budgets.smallest': async ({ runId, assumptions, seconds }) => {
      const ground = sound(planGround(session.store(), runId, assumptions))
      const key = choiceKey(ground)
      const known = await smallestSets.get(key)?.catch(() => undefined)
      const found = await findSmallest(ground, seconds)
      const better = known === undefined ? found : betterOf(known, found)
      smallestSets.set(key, Promise.resolve(better))
      return smallestKnown(better)
    },
    'budgets.improve': async ({ runId, order, cut, assumptions, within, seconds }) => {
      const ground = sound(planGround(session.store(), runId, assumptions))
      const smallest = await smallestFor([order], ground)
      const proven = await ceilings.get(choiceKey(ground))?.catch(() => null)
      const bound = proven?.ceiling[cut] ?? null
      return tasks.run(
        {
          kind: 'improve',
          title: `Better choice of ${countOf(cut, 'pattern')} for run ${ground.run.number}`,
          runId,
        },
        ({ signal, report }) =>
          prover.ask(
            'improve-choice',
            ground,
            { order, cut, smallest, within, seconds, bound },
            { signal, onProgress: report },
          ),
        ({ detected, steepest }) =>
          detected > steepest
            ? `${formats.count(detected - steepest).value} more detected than steepest first`
            : 'nothing better than steepest first was found',
      )
    },
    'budgets.constraintCosts': async ({ runId, order, cut, assumptions }) => {
      const ground = sound(planGround(session.store(), runId, assumptions))
      const smallest = await smallestFor([order], ground)
      const key = choiceKey(ground)
      const input = { order, cut, smallest }
      if (pricedConstraints === key) return prover.ask('price-constraints', ground, input)
      const costs = await tasks.run(
        { kind: 'order', title: `Cost of constraints in run ${ground.run.number}`, runId },
        ({ signal, report }) =>
          prover.ask('price-constraints', ground, input, { signal, onProgress: report }),
      )
      pricedConstraints = key
      return costs
    },
    'budgets.save': async ({ productId, runId, name, note, order, cut, assumptions }) => {
      const store = session.writable()
      const ground = sound(planGround(store, runId, assumptions))
      if (ground.run.productId !== productId)
        throw new AppError('bad-input', 'The run is of another product.')
      const smallest = await smallestFor([order], ground)
      const figures = await planner.ask('figures', ground, { order, cut, smallest })
      if (session.current() !== store) throw new AppError('no-project')
      const id = store.budgets.create({
        productId,
        runId,
        runEndedAtMs: ground.run.endedAtMs ?? 0,
        name,
        note,
        createdAtMs: now(),
        order,
        cut,
        assumptions,
        figures,
      })
      if (store.budgets.listOf(productId).every(({ inUse }) => !inUse)) store.budgets.use(id, true)
      changed(productId)
      return found(store.budgets.get(id))
    },
    'budgets.update': ({ id, name, note, inUse }) => {
      const { budgets } = session.writable()
      const budget = found(budgets.get(id))
      budgets.rename(id, name ?? budget.name, note ?? budget.note)
      if (inUse !== undefined) budgets.use(id, inUse)
      changed(budget.productId)
      return found(budgets.get(id))
    },
    'budgets.delete': ({ id }) => {
      const { budgets, trash } = session.writable()
      const { productId } = found(budgets.get(id))
      const undoToken = randomUUID()
      trash.remove('budget', id, undoToken)
      changed(productId)
      return { undoToken }
    },
    'budgets.money': async ({ runId, order, cut, assumptions }) => {
      const ground = sound(planGround(session.store(), runId, assumptions))
      const smallest = await smallestFor([order], ground)
      return planner.ask('money', ground, { order, cut, smallest })
    },
    'faults.lost': async ({ runId, order, cut, assumptions, block, first, count }) => {
      const ground = sound(planGround(session.store(), runId, assumptions))
      const smallest = await smallestFor([order], ground)
      return planner.ask('lost-faults', ground, { order, cut, block, first, count, smallest })
    },
    'exports.make': async ({ runId, order, cut, assumptions, format }) => {
      const store = session.store()
      const ground = sound(planGround(store, runId, assumptions))
      const { run, product } = ground
      const netlist = found(store.netlists.get(run.netlistId))
      const patternSet = found(store.patternSets.get(run.patternSetId))
      const smallest = await smallestFor([order], ground)
      const subject = {
        product: product.name,
        netlist: netlist.name,
        patternSet: patternSet.name,
        date: new Date(now()).toISOString().slice(0, 10),
        version,
        files: inputFiles(store, run.netlistId, run.patternSetId),
      }
      return tasks.run(
        { kind: 'export', title: `Export of ${product.name}`, runId },
        ({ signal, report }) =>
          planner.ask(
            'make-export',
            ground,
            { order, cut, format, subject, smallest },
            { signal, onProgress: report },
          ),
        ({ fileName }) => fileName,
      )
    },
  }
}

function smallestKnown({ patterns, lowerBound, proven }: Smallest): SmallestFound {
  return { patterns: patterns.length, lowerBound, proven }
}

/** Two searches of the same choice together: the smaller set, the higher bound. */
function betterOf(a: Smallest, b: Smallest): Smallest {
  const { patterns } = a.patterns.length < b.patterns.length ? a : b
  const lowerBound = Math.max(a.lowerBound, b.lowerBound)
  return { patterns, lowerBound, proven: lowerBound === patterns.length }
}

/** Throws AppError 'bad-input' where something of the ground does not fit. */
function sound(ground: PlanGround): PlanGround {
  const [first] = ground.errors
  if (first !== undefined) throw new AppError('bad-input', first.message, { field: first.key })
  return ground
}

/** The field that a desk's refusal is about; null where it is about none. */
function fieldOf(error: unknown): string | null {
  if (!(error instanceof AppError) || error.code !== 'bad-input') return null
  const { field } = (error.details ?? {}) as { field?: unknown }
  return typeof field === 'string' ? field : null
}
