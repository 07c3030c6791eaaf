import { parentPort } from 'node:worker_threads'
import loadHighs from 'highs'
import type { MipModel, MipResult } from '../engine/choose/mip.ts'
import { type SolveAnswer, SolveBest, SolveControl, type SolveRequest } from './highs-protocol.ts'

type Highs = Awaited<ReturnType<typeof loadHighs>>

const owner = parentPort
if (owner === null) throw new Error('the solver runs on a worker thread only')
let loading: Promise<Highs> | null = null

owner.on('message', (request: SolveRequest) => {
  void answer(request)
})

async function answer(request: SolveRequest): Promise<void> {
  let message: SolveAnswer
  try {
    message = { kind: 'done', result: solve(await (loading ??= loadHighs()), request) }
  } catch (error) {
    message = {
      kind: 'failed',
      message: error instanceof Error ? (error.stack ?? error.message) : String(error),
    }
  }
  request.answer.postMessage(message)
  Atomics.store(request.control, SolveControl.Done, 1)
  Atomics.notify(request.control, SolveControl.Done)
}

function solve(highs: Highs, { model, start, control, best }: SolveRequest): MipResult {
  const { modelStatus, callbackType } = highs.constants
  const worst = model.goal === 'most' ? Infinity : -Infinity
  const ask = (event: {
    readonly data: { readonly mip_dual_bound?: number }
    interrupt(): void
  }): undefined => {
    if (event.data.mip_dual_bound !== undefined) best[SolveBest.Bound] = event.data.mip_dual_bound
    if (Atomics.load(control, SolveControl.Stop) === 1) event.interrupt()
  }
  return highs.withModel(modelData(highs, model), (solver): MipResult => {
    solver.options.set({ output_flag: false, mip_rel_gap: 0, mip_abs_gap: 1e-6 })
    if (start !== null) solver.setSolution({ colValue: start })
    solver.run({
      [callbackType.mipInterrupt]: ask,
      [callbackType.simplexInterrupt]: ask,
      [callbackType.ipmInterrupt]: ask,
      [callbackType.mipImprovingSolution]({ data }): undefined {
        if (data.mip_solution === undefined || data.objective_function_value === undefined) return
        best.set(data.mip_solution, SolveBest.Values)
        best[SolveBest.Objective] = data.objective_function_value
        best[SolveBest.HasValues] = 1
      },
    })
    const status = solver.getModelStatus()
    if (status === modelStatus.infeasible)
      return { state: 'infeasible', values: null, objective: -worst, bound: worst }
    const isOptimal = status === modelStatus.optimal
    const isSolved = isOptimal || Number(solver.info.get('primal_solution_status')) === 2
    const isMip = model.isWhole.includes(1)
    return {
      state: isOptimal ? 'optimal' : 'stopped',
      values: isSolved ? solver.getSolution().colValue : null,
      objective: isSolved ? solver.getObjectiveValue() : -worst,
      bound: isMip
        ? Number(solver.info.get('mip_dual_bound'))
        : isOptimal
          ? solver.getObjectiveValue()
          : worst,
    }
  })
}

function modelData({ constants }: Highs, model: MipModel): Parameters<Highs['withModel']>[0] {
  const { variableType, objectiveSense } = constants
  const numCols = model.cost.length
  const numRows = model.rowLower.length
  return {
    numCols,
    numRows,
    sense: model.goal === 'most' ? objectiveSense.maximize : objectiveSense.minimize,
    colCost: model.cost,
    colLower: new Float64Array(numCols),
    colUpper: model.upper,
    rowLower: model.rowLower,
    rowUpper: model.rowUpper,
    matrix: {
      format: 'csr',
      numRows,
      numCols,
      starts: model.rowStart,
      indices: model.rowItems,
      values: model.rowValues,
    },
    integrality: Array.from(model.isWhole, (one) =>
      one === 1 ? variableType.integer : variableType.continuous,
    ),
  }
}
