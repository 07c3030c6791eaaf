import type { SimulationResult, SimulationTask } from '../engine/simulate/simulation.ts'
import { type UnusableCosts, unusableCosts } from '../engine/simulate/unusable-cost.ts'
import type { LoadedNetlist } from './load-netlist.ts'

/** The estimate takes several simulations; on larger netlists reading would wait for it too long. */
const MOST_NETS = 500_000

/** Returns what sources of X cost in coverage; null where there are none, or the netlist is too large to estimate it. */
export async function estimateUnusableCosts(
  { netlist, faults }: LoadedNetlist,
  simulate: (task: SimulationTask) => Promise<SimulationResult>,
): Promise<UnusableCosts | null> {
  if (netlist.circuit.nNets > MOST_NETS) return null
  const estimate = unusableCosts(netlist, faults)
  let step = estimate.next()
  while (step.done !== true) step = estimate.next((await simulate(step.value)).profile)
  return step.value
}
