import type { ProjectStore } from '../../db/open-project.ts'
import { AppError } from '../contract/errors.ts'
import type { Assumptions } from '../contract/shapes/budget.ts'
import type { FieldError } from '../contract/shapes/model.ts'
import type { Run } from '../contract/shapes/run.ts'
import type { Product } from '../engine/quality/product.ts'
import type { Tester } from '../engine/tester/tester.ts'
import type { Desk, DeskOptions } from '../workers/desk.ts'
import type { DeskJobs } from '../workers/desk-protocol.ts'
import type { PlanJobs } from '../workers/plan-jobs.ts'
import { resolveProduct, resolveTester } from './assumptions.ts'
import { found } from './session.ts'
import { storedNetlist, storedPatterns, storedSegments } from './stored-inputs.ts'

type PlanJobName = Exclude<keyof PlanJobs, 'hold-run'>

/** What a plan of a run stands on, resolved; `errors` say what of it does not fit. */
export type PlanGround = {
  readonly run: Run
  readonly tester: Tester
  readonly product: Product
  readonly assumptions: Assumptions
  readonly errors: readonly FieldError[]
}

/** A desk that works on finished runs, and gets each when it is first asked for something of it. */
export type PlanDesk = {
  ask<N extends PlanJobName>(
    name: N,
    ground: PlanGround,
    rest: Omit<DeskJobs[N]['input'], 'key' | 'tester' | 'product' | 'assumptions'>,
    options?: DeskOptions<N>,
  ): Promise<DeskJobs[N]['output']>
}

/** Names a finished run for as long as its result stays what it is. */
export function runKey(store: ProjectStore, run: Run): string {
  return `${store.path} run ${run.id} ${run.endedAtMs}`
}

export function createPlanDesk(desk: Desk, storeNow: () => ProjectStore): PlanDesk {
  const hold = async (store: ProjectStore, run: Run, signal: AbortSignal | undefined): Promise<void> => {
    const segments = await storedSegments(store, run.id)
    await desk.run(
      'hold-run',
      {
        key: runKey(store, run),
        ...storedNetlist(store, run.netlistId),
        patterns: storedPatterns(store, run.patternSetId),
        detectionLimit: run.detectionLimit,
        segments,
      },
      {
        ...(signal === undefined ? {} : { signal }),
        transfer: segments.flat().map(({ buffer }) => buffer as ArrayBuffer),
      },
    )
  }
  return {
    async ask(name, { run, tester, product, assumptions }, rest, options = {}) {
      const store = storeNow()
      const input = {
        ...rest,
        key: runKey(store, run),
        tester,
        product,
        assumptions,
      } as DeskJobs[typeof name]['input']
      try {
        return await desk.run(name, input, options)
      } catch (error) {
        if (!(error instanceof AppError) || error.code !== 'not-found') throw error
        await hold(store, run, options.signal)
        return desk.run(name, input, options)
      }
    },
  }
}

/** Finds run, tester and product and puts the assumptions' own values over theirs. Throws where the run is not done. */
export function planGround(store: ProjectStore, runId: number, assumptions: Assumptions): PlanGround {
  const run = found(store.runs.get(runId))
  if (run.state !== 'done') {
    throw new AppError('bad-input', 'The run is not finished, so there is nothing to plan with yet.')
  }
  const product = found(store.products.get(run.productId))
  const tester = assumptions.testerId === null ? null : store.testers.get(assumptions.testerId)
  const ofProduct = resolveProduct(product.name, { ...product.values, ...assumptions.productValues })
  const ofTester = resolveTester(tester?.name ?? 'Tester', { ...tester?.values, ...assumptions.testerValues })
  return {
    run,
    tester: ofTester.values,
    product: ofProduct.values,
    assumptions,
    errors: [...ofTester.errors, ...ofProduct.errors],
  }
}
