import { mkdir } from 'node:fs/promises'
import { basename, join, resolve } from 'node:path'
import { createApplication } from '../compose.ts'
import { AppError } from '../contract/errors.ts'
import type { InputOf, OperationName, OutputOf } from '../contract/operations.ts'
import type { Assumptions } from '../contract/shapes/budget.ts'
import type { ProductRecord } from '../contract/shapes/model.ts'
import { findInstallation, userFolder } from '../installation.ts'
import { ExitCode, type Command } from './command.ts'
import { writeFile } from './write-file.ts'

const POLL_MS = 50

/** Builds the demo project and a report of each of its products in a folder. */
export const demo: Command = {
  usage: ['[FOLDER]'],
  options: {},
  details: () => [
    'The folder is made where it is new; without one it is "tallycut-demo" here. A demo project that is there already is kept as it is.',
  ],
  examples: ['', 'greenhouse'],
  async run(args, terminal, io) {
    const folder = resolve(args.operands[0] ?? 'tallycut-demo')
    await mkdir(folder, { recursive: true })
    const application = createApplication({
      installation: findInstallation(io.entryUrl),
      door: 'command line',
      userFolder: io.env['TALLYCUT_USER_FOLDER'] ?? userFolder(),
      projectFolder: folder,
      onFault: (where, error) => terminal.warn(`fault in ${where}: ${String(error)}`),
    })
    const call = async <N extends OperationName>(name: N, input: InputOf<N>): Promise<OutputOf<N>> => {
      const result = await application.dispatch(name, input)
      if (!result.ok) throw new AppError(result.error.code, result.error.message, result.error.details)
      return result.value
    }
    try {
      const project = await call('projects.openDemo', {})
      io.stdout.write(`${project.path}\n`)
      for (const { id } of project.products) {
        const runId = await endOfLatestRun(id)
        const { product } = await call('products.get', { id })
        const assumptions = assumptionsOf(product)
        const { view } = await call('budgets.view', { runId, orders: ['steepest'], assumptions })
        const columns = view?.orders[0]
        if (!view || !columns) throw new AppError('internal', `${product.name} has no figures`)
        const goal = view.markers[0]?.marks.find(({ kind }) => kind === 'goal')?.cut ?? columns.chosen
        const made = await call('exports.make', {
          runId,
          order: 'steepest',
          cut: goal,
          assumptions,
          format: 'html',
        })
        const path = join(folder, basename(made.fileName))
        await writeFile(path, [made.bytes])
        io.stdout.write(`${path}\n`)
      }
    } finally {
      await application.close()
    }
    return ExitCode.Done

    async function endOfLatestRun(productId: number): Promise<number> {
      for (;;) {
        const { runs } = await call('products.get', { id: productId })
        const latest = runs.toSorted((a, b) => b.number - a.number)[0]
        if (latest?.state === 'done') return latest.id
        if (latest === undefined || latest.state === 'failed') {
          throw new AppError(
            'internal',
            `A run of the demo did not end: ${latest?.reason ?? 'there is none'}`,
          )
        }
        await new Promise((again) => setTimeout(again, POLL_MS))
      }
    }
  },
}

function assumptionsOf({ testerId, limits }: ProductRecord): Assumptions {
  return {
    testerId,
    testerValues: {},
    productValues: {},
    limits,
    constraints: null,
    weights: null,
    n: 1,
    byHand: null,
  }
}
