import { existsSync, rmSync } from 'node:fs'
import { readFile } from 'node:fs/promises'
import { join } from 'node:path'
import { AppError } from '../contract/errors.ts'
import type { Handlers } from '../contract/handlers.ts'
import type { FieldValues, Limits } from '../contract/shapes/model.ts'
import type { Project } from '../contract/shapes/project.ts'
import { projectOf, type Projects } from './projects.ts'
import type { Session } from './session.ts'
import type { TaskContext, Tasks } from './tasks.ts'

/** The demo project as its folder describes it; files are named by their place in it. */
type DemoPlan = {
  readonly name: string
  readonly testers: readonly { readonly name: string; readonly note: string; readonly values: FieldValues }[]
  readonly products: readonly {
    readonly name: string
    readonly note: string
    readonly netlist: string
    readonly patternSets: readonly string[]
    readonly tester: string
    readonly values: FieldValues
    readonly limits: Limits
  }[]
}

/** Builds the demo project through the same operations that a user has, or opens it where it is already. */
export function createDemo(options: {
  readonly handlers: Omit<Handlers, 'projects.openDemo'>
  readonly tasks: Tasks
  readonly projects: Projects
  readonly session: Session
  readonly assets: string
  readonly projectFolder: string
}): Pick<Handlers, 'projects.openDemo'> {
  const { handlers, tasks, projects, session, projectFolder } = options
  const folder = join(options.assets, 'demo')

  const addFile = async (name: string): Promise<string> => {
    const bytes = new Uint8Array(await readFile(join(folder, name)))
    return (await handlers['files.add']({ name, bytes })).fileId
  }

  const build = async (plan: DemoPlan, { report, signal }: TaskContext): Promise<void> => {
    const steps = plan.products.reduce((sum, { patternSets }) => sum + 1 + patternSets.length, 0)
    let done = 0
    const step = (phase: string): void => {
      if (signal.aborted) throw new AppError('cancelled')
      report({ phase, share: done++ / steps })
    }
    const testerIds = new Map<string, number>()
    for (const { name, note, values } of plan.testers) {
      const { id } = await handlers['testers.create']({ name, values })
      await handlers['testers.update']({ id, note })
      testerIds.set(name, id)
    }
    for (const product of plan.products) {
      const { id: productId } = await handlers['products.create']({ name: product.name })
      const { note, values, limits } = product
      const testerId = testerIds.get(product.tester) ?? null
      await handlers['products.update']({ id: productId, note, values, limits, testerId })
      step(`Reading ${product.netlist}`)
      const netlistFile = await addFile(product.netlist)
      const { inspectionId } = await handlers['netlists.inspect']({
        fileIds: [netlistFile],
        libraryFileIds: [],
        top: null,
        testPins: [],
        assumeScanned: false,
      })
      const netlist = await handlers['netlists.save']({ productId, inspectionId, name: 'r1', note: '' })
      const fileIds = [netlistFile]
      for (const [at, file] of product.patternSets.entries()) {
        step(`Reading ${file}`)
        const fileId = await addFile(file)
        fileIds.push(fileId)
        const read = await handlers['patternSets.inspect']({ netlistId: netlist.id, fileIds: [fileId] })
        const name = `Set ${String.fromCharCode(65 + at)}`
        const { id: patternSetId } = await handlers['patternSets.save']({
          productId,
          inspectionId: read.inspectionId,
          name,
          note: '',
        })
        await handlers['runs.start']({ netlistId: netlist.id, patternSetId, detectionLimit: 0 })
      }
      await handlers['files.drop']({ fileIds })
    }
  }

  return {
    async 'projects.openDemo'(): Promise<Project> {
      const plan = JSON.parse(await readFile(join(folder, 'demo.json'), 'utf8')) as DemoPlan
      const path = join(projectFolder, `${plan.name}.tallycut`)
      if (existsSync(path)) return projects.open(path)
      await handlers['projects.create']({ name: plan.name })
      try {
        await tasks.run({ kind: 'demo', title: 'Building the demo project' }, (context) =>
          build(plan, context),
        )
      } catch (error) {
        session.close()
        rmSync(path, { force: true })
        await handlers['projects.forget']({ path })
        throw error
      }
      projects.remember(session.store())
      return projectOf(session.store())
    },
  }
}
