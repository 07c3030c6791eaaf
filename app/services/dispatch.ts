import { AppError, ERROR_MESSAGES, type ErrorCode, type Result } from '../contract/errors.ts'
import type { Handlers } from '../contract/handlers.ts'
import { operations, type OperationName, type OutputOf } from '../contract/operations.ts'

/** The one way from a door to the services: whatever comes in is checked, whatever happens comes back as a Result. */
export type Dispatch = {
  <N extends OperationName>(name: N, rawInput: unknown): Promise<Result<OutputOf<N>>>
  (name: string, rawInput: unknown): Promise<Result<unknown>>
}

export type DispatchOptions = {
  /** Also check what the services answer, for tests and development. */
  readonly checkOutput?: boolean
  /** Told of faults in the program itself, with what was asked. */
  readonly onFault: (name: string, error: unknown) => void
}

/** Returns dispatch over these handlers. It never rejects. */
export function createDispatch(
  handlers: Handlers,
  { checkOutput = false, onFault }: DispatchOptions,
): Dispatch {
  const dispatch = async (name: string, rawInput: unknown): Promise<Result<unknown>> => {
    if (!Object.hasOwn(operations, name)) return failed('not-found', `There is no operation "${name}".`)
    const operation = operations[name as OperationName]
    const input = operation.input.safeParse(rawInput ?? {})
    if (!input.success) {
      const issues = input.error.issues.map(({ path, message }) => ({ path: path.join('.'), message }))
      const [first] = issues
      const where = first === undefined || first.path === '' ? '' : ` (${first.path}: ${first.message})`
      return failed('bad-input', `${ERROR_MESSAGES['bad-input']}${where}`, issues)
    }
    try {
      const handler = handlers[name as OperationName] as (input: unknown) => unknown
      const value = await handler(input.data)
      if (checkOutput) operation.output.parse(value)
      return { ok: true, value }
    } catch (error) {
      const { code, message, details } = asAppError(error)
      if (code === 'internal') onFault(name, error)
      return failed(code, message, details)
    }
  }
  return dispatch as Dispatch
}

function failed(code: ErrorCode, message: string, details?: unknown): Result<never> {
  return { ok: false, error: details === undefined ? { code, message } : { code, message, details } }
}

/** Causes outside the program have codes of their own; what is left is a fault of the program. */
function asAppError(error: unknown): AppError {
  if (error instanceof AppError) return error
  const code = (error as { code?: unknown } | null)?.code
  if (typeof code === 'string') {
    if (code === 'SQLITE_FULL' || code === 'ENOSPC') return new AppError('disk-full')
    if (code.startsWith('SQLITE_CORRUPT') || code === 'SQLITE_NOTADB') return new AppError('damaged-project')
    if (code.startsWith('SQLITE_READONLY') || code === 'EROFS') return new AppError('read-only')
    if (code.startsWith('SQLITE_BUSY')) {
      return new AppError('in-use', 'The project is in use by another program. Try again once it is not.')
    }
    if (
      code === 'EACCES' ||
      code === 'EPERM' ||
      code === 'ENOENT' ||
      code === 'ENOTDIR' ||
      code === 'EISDIR'
    ) {
      return new AppError('not-allowed', (error as Error).message)
    }
  }
  return new AppError('internal', undefined, error instanceof Error ? error.message : String(error), error)
}
