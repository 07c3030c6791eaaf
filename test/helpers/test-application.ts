import { join } from 'node:path'
import { pathToFileURL } from 'node:url'
import { onTestFinished } from 'vitest'
import { createApplication, type Application } from '../../app/compose.ts'
import { AppError } from '../../app/contract/errors.ts'
import type { InputOf, OperationName, OutputOf } from '../../app/contract/operations.ts'
import type { Run } from '../../app/contract/shapes/run.ts'
import { findInstallation } from '../../app/installation.ts'
import { tempFolder } from './temp-folder.ts'

export type TestApplication = {
  readonly application: Application
  readonly folder: string
  /** Faults in the program itself that it told of. */
  readonly faults: unknown[]
  /** The answer; throws AppError where it is no. */
  call<N extends OperationName>(name: N, input: InputOf<N>): Promise<OutputOf<N>>
  /** Hands a text in as a file. */
  addText(name: string, text: string): Promise<string>
  /** Waits until a run has ended. */
  ended(productId: number, runId: number): Promise<Run>
}

const installation = findInstallation(pathToFileURL(join(import.meta.dirname, '../../app/cli/index.ts')).href)

/** The whole application on real files in a temporary folder; answers are checked against the contract. */
export function testApplication(folder: string = tempFolder()): TestApplication {
  const faults: unknown[] = []
  const application = createApplication({
    installation,
    door: 'command line',
    userFolder: join(folder, 'user'),
    projectFolder: join(folder, 'projects'),
    threads: 1,
    checkOutput: true,
    onFault: (_, error) => faults.push(error),
  })
  onTestFinished(() => application.close())
  const call: TestApplication['call'] = async (name, input) => {
    const result = await application.dispatch(name, input)
    if (!result.ok) throw new AppError(result.error.code, result.error.message, result.error.details)
    return result.value
  }
  return {
    application,
    folder,
    faults,
    call,
    async addText(name, text) {
      const { fileId } = await call('files.add', { name, bytes: new TextEncoder().encode(text) })
      return fileId
    },
    async ended(productId, runId) {
      for (;;) {
        const { runs } = await call('products.get', { id: productId })
        const run = runs.find(({ id }) => id === runId)
        if (run === undefined) throw new Error(`there is no run ${runId}`)
        if (run.state !== 'queued' && run.state !== 'running') return run
        await new Promise((again) => setTimeout(again, 10))
      }
    },
  }
}

/** A full adder with a flip-flop for its carry: 2 inputs, 1 output, 1 flip-flop. */
export const SERIAL_ADDER = `# a serial adder
INPUT(a)
INPUT(b)
OUTPUT(sum)
carry = DFF(next)
half = XOR(a, b)
sum = XOR(half, carry)
both = AND(a, b)
pass = AND(half, carry)
next = OR(both, pass)
`

/** All eight patterns of the serial adder. */
export const ALL_EIGHT = ['000', '001', '010', '011', '100', '101', '110', '111'].join('\n')

/** Creates a project with a product, the serial adder and all its patterns; returns the ids. */
export async function adderProject({ call, addText }: TestApplication): Promise<{
  productId: number
  netlistId: number
  patternSetId: number
}> {
  await call('projects.create', { name: 'Adders' })
  const { id: productId } = await call('products.create', { name: 'Adder' })
  const netlist = await call('netlists.inspect', { fileIds: [await addText('adder.bench', SERIAL_ADDER)] })
  const { id: netlistId } = await call('netlists.save', {
    productId,
    inspectionId: netlist.inspectionId,
    name: 'r1',
  })
  const patterns = await call('patternSets.inspect', {
    netlistId,
    fileIds: [await addText('all.vec', ALL_EIGHT)],
  })
  const { id: patternSetId } = await call('patternSets.save', {
    productId,
    inspectionId: patterns.inspectionId,
    name: 'All',
  })
  return { productId, netlistId, patternSetId }
}

export const NO_LIMITS = { maxMilliseconds: null, minCoverage: null, maxDppm: null }
