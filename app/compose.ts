import { availableParallelism } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { userFile } from '../db/user-file.ts'
import type { Handlers } from './contract/handlers.ts'
import { versionOf, type Installation } from './installation.ts'
import { createBudgets } from './services/budgets.ts'
import { createDemo } from './services/demo.ts'
import { createDispatch, type Dispatch } from './services/dispatch.ts'
import { createEventHub, type EventHub } from './services/event-hub.ts'
import { createFiles } from './services/files.ts'
import { createHost, type HostInfo } from './services/host.ts'
import { createNetlists } from './services/netlists.ts'
import { pageFile, type PageFile } from './services/page-files.ts'
import { createPatternSets } from './services/pattern-sets.ts'
import { createPlanDesk } from './services/plan-desk.ts'
import { createProducts } from './services/products.ts'
import { createProjects } from './services/projects.ts'
import { createRuns } from './services/runs.ts'
import { createSession } from './services/session.ts'
import { createSettings, parseUserState } from './services/settings.ts'
import { createTasks } from './services/tasks.ts'
import { createTesters } from './services/testers.ts'
import { createDesk, type Desk } from './workers/desk.ts'

export type ApplicationConfig = {
  readonly installation: Installation
  readonly door: HostInfo['door']
  /** Where settings and the list of recent projects are kept. */
  readonly userFolder: string
  readonly projectFolder: string
  /** Threads that simulate; all processors but one where not said, so that one stays free to answer. */
  readonly threads?: number
  readonly now?: () => number
  /** Told of faults in the program itself. */
  readonly onFault: (where: string, error: unknown) => void
  /** Checks what services answer against the contract, for tests and development. */
  readonly checkOutput?: boolean
}

export type Application = {
  readonly dispatch: Dispatch
  readonly events: EventHub
  page(path: string): Promise<PageFile | null>
  /** Leaves everything as it can be gone on with: runs stand at their last segment. */
  close(): Promise<void>
}

/** Builds the application: the only place where database, threads and services meet. */
export function createApplication(config: ApplicationConfig): Application {
  const { installation, door, projectFolder, onFault, now = Date.now } = config
  const version = versionOf(installation)
  const engine = `Tallycut ${version}`
  const userState = userFile(join(config.userFolder, 'tallycut.json'), parseUserState)
  const threads = {
    simulateScript: fileURLToPath(installation.thread('simulate-worker')),
    kernel: installation.kernel,
    count: config.threads ?? Math.max(1, availableParallelism() - 1),
  }
  const desk = (name: string): Desk => createDesk(installation.thread('desk-worker'), name, threads)
  const desks = {
    reader: desk('reader'),
    runner: desk('runner'),
    planner: desk('planner'),
    prover: desk('prover'),
  }

  const events = createEventHub()
  const session = createSession()
  const tasks = createTasks(events, now)
  const files = createFiles()
  const projects = createProjects({
    session,
    events,
    userState,
    projectFolder,
    now,
    files: {
      create: async (...args) => (await import('../db/open-project.ts')).createProject(...args),
      open: async (path) => (await import('../db/open-project.ts')).openProject(path),
    },
  })
  const common = { session, events, tasks, now }
  const parts: Omit<Handlers, 'projects.openDemo'> = {
    ...createHost({ version, engine, door, projectFolder }),
    ...createSettings(userState, events),
    ...files.handlers,
    ...projects.handlers,
    ...createProducts(session, events, now),
    ...createTesters(session, events, now),
    ...createNetlists({ ...common, files, desk: desks.reader }),
    ...createPatternSets({ ...common, files, desk: desks.reader }),
    ...createRuns({ ...common, desk: desks.runner, engine, onFault }),
    ...createBudgets({
      ...common,
      planner: createPlanDesk(desks.planner, session.store),
      prover: createPlanDesk(desks.prover, session.store),
      version,
    }),
    ...tasks.handlers,
  }
  const handlers: Handlers = {
    ...parts,
    ...createDemo({
      handlers: parts,
      tasks,
      projects,
      session,
      assets: installation.assets,
      projectFolder,
    }),
  }
  return {
    dispatch: createDispatch(handlers, { checkOutput: config.checkOutput ?? false, onFault }),
    events,
    page: (path) => pageFile(installation.page, path),
    async close() {
      session.close()
      tasks.cancelAll()
      await Promise.all(Object.values(desks).map((one) => one.close()))
    },
  }
}
