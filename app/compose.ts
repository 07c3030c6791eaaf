import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { userFile } from '../db/user-file.ts'
import type { Handlers } from './contract/handlers.ts'
import type { Installation } from './installation.ts'
import { createDispatch, type Dispatch } from './services/dispatch.ts'
import { createEventHub, type EventHub } from './services/event-hub.ts'
import { createFiles } from './services/files.ts'
import { createHost, type HostInfo } from './services/host.ts'
import { pageFile, type PageFile } from './services/page-files.ts'
import { createProducts } from './services/products.ts'
import { createProjects } from './services/projects.ts'
import { createSession } from './services/session.ts'
import { createSettings, parseUserState } from './services/settings.ts'
import { createTasks } from './services/tasks.ts'
import { createTesters } from './services/testers.ts'

export type ApplicationConfig = {
  readonly installation: Installation
  readonly door: HostInfo['door']
  /** Where settings and the list of recent projects are kept. */
  readonly userFolder: string
  readonly projectFolder: string
  readonly now?: () => number
  /** Told of faults in the program itself. */
  readonly onFault: (where: string, error: unknown) => void
  readonly checkOutput?: boolean
}

export type Application = {
  readonly dispatch: Dispatch
  readonly events: EventHub
  page(path: string): Promise<PageFile | null>
  /** Leaves everything as it can be gone on with: runs stand at their last checkpoint. */
  close(): Promise<void>
}

/** Builds the application: the only place where database, threads and services meet. */
export function createApplication(config: ApplicationConfig): Application {
  const { installation, door, projectFolder, onFault, now = Date.now } = config
  const { version } = JSON.parse(readFileSync(join(installation.root, 'package.json'), 'utf8')) as {
    version: string
  }
  const events = createEventHub()
  const session = createSession()
  const tasks = createTasks(events, now)
  const files = createFiles()
  const userState = userFile(join(config.userFolder, 'tallycut.json'), parseUserState)
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
  const handlers = {
    ...createHost({ version, engine: `Tallycut ${version}`, door, projectFolder }),
    ...createSettings(userState, events),
    ...createProducts(session, events, now),
    ...createTesters(session, events, now),
    ...projects.handlers,
    ...files.handlers,
    ...tasks.handlers,
  } as unknown as Handlers
  return {
    dispatch: createDispatch(handlers, { checkOutput: config.checkOutput ?? false, onFault }),
    events,
    page: (path) => pageFile(installation.page, path),
    async close() {
      tasks.cancelAll()
      session.close()
    },
  }
}
