import { OTHER_BLOCKS, sortIntoBlocks } from '../quality/block-coverage.ts'
import type { Product } from '../quality/product.ts'
import type { FaultList } from '../faults/fault-list.ts'
import type { Contradiction } from '../tester/assumption-field.ts'
import type { PatternFacts, ScanFacts } from '../tester/time-model.ts'

/**
 * Returns what in a product does not fit the netlist and the pattern set that it is to be planned for, key by key; figures
 * worked out all the same would be wrong.
 */
export function planProblems(
  product: Product,
  faults: FaultList,
  patterns: PatternFacts,
  scan: ScanFacts,
): readonly Contradiction<Product>[] {
  return [
    ...blockProblems(product, faults),
    ...burstProblems(product, patterns),
    ...chainProblems(product, patterns, scan),
  ]
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

/** Where patterns give their own cycles, chains say nothing: scan data may be expanded on chip. */
function chainProblems(
  { chains, longestChain }: Product,
  { cycles }: PatternFacts,
  { flipFlops }: ScanFacts,
): readonly Contradiction<Product>[] {
  const isModelled = cycles === null || cycles.includes(0)
  if (flipFlops === 0 || !isModelled) return []
  const found: Contradiction<Product>[] = []
  if (chains !== null && chains > flipFlops) {
    found.push({
      key: 'chains',
      message: `${chains} chains are more than the netlist's ${flipFlops} scanned flip-flops`,
      hint: 'Where scan data are expanded on chip, give the tester cycles of each pattern instead',
    })
  }
  if (longestChain !== null && longestChain > flipFlops) {
    found.push({
      key: 'longestChain',
      message: `a chain of ${longestChain} bits is longer than the netlist's ${flipFlops} scanned flip-flops`,
      hint: 'Give the longest chain in bits, or null to work it out',
    })
  }
  if (chains !== null && longestChain !== null && chains * longestChain < flipFlops) {
    found.push({
      key: 'longestChain',
      message: `${chains} chains of at most ${longestChain} bits do not hold ${flipFlops} flip-flops`,
      hint: `The longest has ${Math.ceil(flipFlops / chains)} bits or more`,
    })
  }
  return found
}
