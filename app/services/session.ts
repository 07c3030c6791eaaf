import type { ProjectStore } from '../../db/open-project.ts'
import { AppError } from '../contract/errors.ts'

/** The project that is open, if one is. */
export type Session = {
  current(): ProjectStore | null
  /** Throws AppError 'no-project' where none is open. */
  store(): ProjectStore
  /** The same for writing: throws AppError 'read-only' where that may not be. */
  writable(): ProjectStore
  /** Closes what is open and takes this project instead. */
  open(store: ProjectStore): void
  close(): void
  /** Called with a project before it is closed, to let go of it. */
  onClose(letGo: (store: ProjectStore) => void): void
}

export function createSession(): Session {
  let open: ProjectStore | null = null
  const lettingGo: ((store: ProjectStore) => void)[] = []
  const store = (): ProjectStore => {
    if (open === null) throw new AppError('no-project')
    return open
  }
  const close = (): void => {
    if (open === null) return
    const closing = open
    for (const letGo of lettingGo) letGo(closing)
    open = null
    closing.close()
  }
  return {
    current: () => open,
    store,
    writable() {
      if (store().readOnly) throw new AppError('read-only')
      return store()
    },
    open(next) {
      close()
      open = next
    },
    close,
    onClose: (letGo) => void lettingGo.push(letGo),
  }
}

/** Returns what is there; throws AppError 'not-found' where it is not any more. */
export function found<T>(value: T | null): T {
  if (value === null) throw new AppError('not-found')
  return value
}
