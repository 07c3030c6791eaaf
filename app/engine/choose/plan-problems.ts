import { OTHER_BLOCKS, sortIntoBlocks } from '../quality/block-coverage.ts'
import type { Product } from '../quality/product.ts'
import type { FaultList } from '../faults/fault-list.ts'
import type { Contradiction } from '../tester/assumption-field.ts'
import type { PatternFacts } from '../tester/time-model.ts'

/**
 * Returns what in a product does not fit the netlist and the pattern set that it is to be planned for, key by key; figures
 * worked out all the same would be wrong.
 */
export function planProblems(
  product: Product,
  faults: FaultList,
  patterns: PatternFacts,
): readonly Contradiction<Product>[] {
  return [...blockProblems(product, faults), ...burstProblems(product, patterns)]
}

function blockProblems({ areaShares }: Product, faults: FaultList): readonly Contradiction<Product>[] {
  if (areaShares === null) return []
  const { blockOf, classWeights } = sortIntoBlocks(faults, areaShares)
  const found: Contradiction<Product>[] = areaShares
    .filter(({ share }, block) => share > 0 && classWeights[block].every((count) => count === 0))
    .map(({ block }) => ({
      key: 'areaShares',
      message: `no fault of the netlist lies in block "${block}", so its share of the area has no coverage`,
      hint: 'Name blocks by the beginning of their hierarchical names, such as core/alu',
    }))
  const outside = blockOf.reduce((count, block) => count + (block < 0 ? 1 : 0), 0)
  if (outside > 0) {
    found.push({
      key: 'areaShares',
      message: `${outside} faults lie in none of the blocks`,
      hint: `Give what is left a share of its own, as block "${OTHER_BLOCKS}"`,
    })
  }
  return found
}

function burstProblems({ insertions }: Product, { bursts }: PatternFacts): readonly Contradiction<Product>[] {
  const known = bursts.map(({ name }) => name)
  return (insertions ?? []).flatMap(({ name, bursts: wanted }) =>
    (wanted ?? [])
      .filter((burst) => !known.includes(burst))
      .map((burst) => ({
        key: 'insertions' as const,
        message: `insertion "${name}" runs burst "${burst}", which the pattern set does not have`,
        hint: `Its bursts: ${known.join(', ')}`,
      })),
  )
}
