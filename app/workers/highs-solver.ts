import loadHighs from 'highs'
import type { MipModel, MipResult, MipSolver } from '../engine/choose/mip.ts'

/**
 * Loads HiGHS and returns it as the solver that the engine asks for. A solve blocks its thread; it asks `goOn` at every
 * checkpoint of the solver and stops when told to. Models are solved to a gap below `absoluteGap`.
 */
export async function loadHighsSolver(absoluteGap = 1e-6): Promise<MipSolver> {
  const highs = await loadHighs()
  const { modelStatus, callbackType, variableType, objectiveSense } = highs.constants
  return (model: MipModel, goOn: () => boolean, start?: Float64Array): MipResult =>
    highs.withModel(
      {
        numCols: model.cost.length,
        numRows: model.rowLower.length,
        sense: model.goal === 'most' ? objectiveSense.maximize : objectiveSense.minimize,
        colCost: model.cost,
        colLower: new Float64Array(model.cost.length),
        colUpper: model.upper,
        rowLower: model.rowLower,
        rowUpper: model.rowUpper,
        matrix: {
          format: 'csr',
          numRows: model.rowLower.length,
          numCols: model.cost.length,
          starts: model.rowStart,
          indices: model.rowItems,
          values: model.rowValues,
        },
        integrality: Array.from(model.isWhole, (one) =>
          one === 1 ? variableType.integer : variableType.continuous,
        ),
      },
      (solver) => {
        solver.options.set({ output_flag: false, mip_rel_gap: 0, mip_abs_gap: absoluteGap })
        if (start !== undefined) solver.setSolution({ colValue: start })
        const ask = (event: { interrupt(): void }): undefined => {
          if (!goOn()) event.interrupt()
        }
        solver.run({
          [callbackType.mipInterrupt]: ask,
          [callbackType.simplexInterrupt]: ask,
          [callbackType.ipmInterrupt]: ask,
        })
        const status = solver.getModelStatus()
        const isMip = model.isWhole.includes(1)
        const isOptimal = status === modelStatus.optimal
        const worst = model.goal === 'most' ? Infinity : -Infinity
        if (status === modelStatus.infeasible) {
          return { state: 'infeasible', values: null, objective: -worst, bound: worst }
        }
        const { colValue } = solver.getSolution()
        const isSolved = isOptimal || Number(solver.info.get('primal_solution_status')) === 2
        return {
          state: isOptimal ? 'optimal' : 'stopped',
          values: isSolved ? colValue : null,
          objective: isSolved ? solver.getObjectiveValue() : -worst,
          bound: isMip
            ? Number(solver.info.get('mip_dual_bound'))
            : isOptimal
              ? solver.getObjectiveValue()
              : worst,
        }
      },
    )
}
