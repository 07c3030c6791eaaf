import { existsSync, mkdirSync } from 'node:fs'
import { basename, join, resolve } from 'node:path'
import type { ProjectStore } from '../../db/open-project.ts'
import type { Handlers } from '../contract/handlers.ts'
import type { Project } from '../contract/shapes/project.ts'
import type { EventHub } from './event-hub.ts'
import type { Session } from './session.ts'
import type { UserStateFile } from './settings.ts'

/** How project files are made and opened; the database itself is loaded when the first one is. */
export type ProjectFiles = {
  create(path: string, name: string, atMs: number): Promise<ProjectStore>
  open(path: string): Promise<ProjectStore>
}

export type Projects = ReturnType<typeof createProjects>

const EXTENSION = '.tallycut'
const RECENT_KEPT = 20

export function createProjects(options: {
  readonly session: Session
  readonly events: EventHub
  readonly files: ProjectFiles
  readonly userState: UserStateFile
  readonly projectFolder: string
  readonly now: () => number
}) {
  const { session, events, files, userState, projectFolder, now } = options
  const changed = (): void => events.emit('changed', { noun: 'project', productId: null })

  const remember = (store: ProjectStore): void => {
    const state = userState.read()
    const entry = { path: store.path, name: store.name(), openedAtMs: now(), summary: summaryOf(store) }
    const others = state.recent.filter(({ path }) => path !== store.path)
    userState.write({ ...state, recent: [entry, ...others].slice(0, RECENT_KEPT) })
  }
  session.onClose(remember)

  const take = (store: ProjectStore): Project => {
    session.open(store)
    remember(store)
    changed()
    return projectOf(store)
  }

  const open = async (given: string): Promise<Project> => {
    const path = resolve(given)
    const current = session.current()
    if (current?.path === path) return projectOf(current)
    return take(await files.open(path))
  }

  const handlers: Pick<Handlers, Exclude<`projects.${string}` & keyof Handlers, 'projects.openDemo'>> = {
    'projects.recent': () => ({
      projects: userState.read().recent.map((entry) => {
        const current = session.current()
        const summary = current?.path === entry.path ? summaryOf(current) : entry.summary
        return { ...entry, summary, found: existsSync(entry.path) }
      }),
    }),
    'projects.current': () => {
      const store = session.current()
      return { project: store === null ? null : projectOf(store) }
    },
    'projects.create': async ({ name, folder }) => {
      const into = resolve(folder ?? projectFolder)
      mkdirSync(into, { recursive: true })
      return take(await files.create(join(into, `${fileNameOf(name)}${EXTENSION}`), name, now()))
    },
    'projects.open': ({ path }) => open(path),
    'projects.close': () => {
      session.close()
      changed()
      return {}
    },
    'projects.forget': ({ path }) => {
      const state = userState.read()
      userState.write({ ...state, recent: state.recent.filter((entry) => entry.path !== path) })
      changed()
      return {}
    },
  }
  return { handlers, open, take, remember }
}

export function projectOf(store: ProjectStore): Project {
  return {
    path: store.path,
    name: store.name() || basename(store.path, EXTENSION),
    readOnly: store.readOnly,
    notice: store.notice,
    products: store.products.summaries(),
    testers: store.testers.list().length,
  }
}

function summaryOf(store: ProjectStore): string {
  const products = store.products.summaries().length
  const runs = store.runs.count()
  const counted = (count: number, word: string): string => `${count} ${word}${count === 1 ? '' : 's'}`
  return `${counted(products, 'product')}, ${counted(runs, 'run')}`
}

/** Returns a name as every file system takes it. */
function fileNameOf(name: string): string {
  const plain = name
    .normalize('NFC')
    .replace(/[\p{Cc}<>:"/\\|?*]/gu, ' ')
    .replace(/\s+/g, ' ')
    .replace(/^[\s.]+|[\s.]+$/g, '')
  return plain === '' ? 'Project' : plain.slice(0, 100)
}
