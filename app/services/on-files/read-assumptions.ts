import { readConstraints } from '../../engine/formats/constraints/read-constraints.ts'
import { readProgram } from '../../engine/formats/program/read-program.ts'
import { readWeights } from '../../engine/formats/weights/read-weights.ts'
import { DEFAULT_PRODUCT, readProduct, type Product } from '../../engine/quality/product.ts'
import type { Reading } from '../../engine/source/diagnostic.ts'
import type { Source } from '../../engine/source/source.ts'
import type { ProgramRow } from '../../engine/tester/program.ts'
import { DEFAULT_TESTER, readTester, type Tester } from '../../engine/tester/tester.ts'
import { valueOf, type FileWork } from './file-work.ts'
import { readOne } from './read-sources.ts'

/** The files around a plan, by their paths; null where there is none. */
export type AssumptionFiles = {
  readonly tester: string | null
  readonly product: string | null
  readonly program: string | null
  readonly constraints: string | null
  readonly weights: string | null
}

export type FileAssumptions = {
  readonly tester: Tester
  readonly product: Product
  readonly program: readonly ProgramRow[]
  readonly constraints: Source | null
  readonly weights: Source | null
}

/** Reads what does not depend on netlist and patterns, so that mistakes show before anything is simulated. Throws as valueOf does. */
export async function readAssumptionFiles(files: AssumptionFiles, work: FileWork): Promise<FileAssumptions> {
  const read = async <T>(
    path: string | null,
    reader: (source: Source) => Reading<T>,
    otherwise: T,
  ): Promise<T> => {
    if (path === null) return otherwise
    const source = await readOne(path, work)
    return valueOf(work, reader(source), [source])
  }
  const tester = await read(files.tester, readTester, DEFAULT_TESTER)
  const product = await read(files.product, readProduct, DEFAULT_PRODUCT)
  const program = await read(files.program, readProgram, [])
  const constraints = files.constraints === null ? null : await readOne(files.constraints, work)
  const weights = files.weights === null ? null : await readOne(files.weights, work)
  if (weights !== null) valueOf(work, withoutWarnings(readWeights(weights)), [weights])
  return { tester, product, program, constraints, weights }
}

/** Reads the constraints for a set of so many patterns, for their errors alone. Throws as valueOf does. */
export function checkConstraints({ constraints }: FileAssumptions, nPatterns: number, work: FileWork): void {
  if (constraints === null) return
  valueOf(work, withoutWarnings(readConstraints(constraints, nPatterns)), [constraints])
}

/** Warnings come again when the file is put to use. */
function withoutWarnings<T>({ value, diagnostics }: Reading<T>): Reading<T> {
  return { value, diagnostics: diagnostics.filter(({ severity }) => severity === 'error') }
}
