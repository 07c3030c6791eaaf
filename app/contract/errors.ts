/** Every reason for which an operation can fail, with what is said where nothing more precise is known. */
export const ERROR_MESSAGES = {
  'bad-input': 'The request does not have the form that this operation expects.',
  'bad-file': 'The file could not be read as what it was taken for.',
  'not-found': 'There is nothing of that name here any more.',
  'no-project': 'No project is open. Create one or open one first.',
  'name-taken': 'That name is in use here. Choose another.',
  'read-only': 'The project is open for reading only, so nothing was changed.',
  'newer-project': 'The project was written by a newer version of Tallycut.',
  'damaged-project': 'The project file is damaged. It was left as it is.',
  'not-a-project': 'The file is no Tallycut project.',
  'in-use': 'Something else still needs this, so it was kept.',
  'out-of-reach': 'No choice of these patterns can meet that.',
  cancelled: 'Cancelled. What was there before is unchanged.',
  'worker-lost':
    'A computing thread ended unexpectedly. What had been saved is kept; the run can be resumed.',
  'disk-full': 'There is no room left on the disk. What had been saved is kept.',
  'not-allowed': 'This door does not allow that.',
  internal: 'A fault in Tallycut itself. What had been saved is kept.',
} as const satisfies Record<string, string>

export type ErrorCode = keyof typeof ERROR_MESSAGES

/** A failure that a user can act on; doors turn it into a failed Result. */
export class AppError extends Error {
  readonly code: ErrorCode
  readonly details: unknown

  constructor(
    code: ErrorCode,
    message: string = ERROR_MESSAGES[code],
    details: unknown = undefined,
    cause?: unknown,
  ) {
    super(message, cause === undefined ? undefined : { cause })
    this.name = 'AppError'
    this.code = code
    this.details = details
  }
}

/** What every operation answers, at every door. */
export type Result<T> =
  | { readonly ok: true; readonly value: T }
  | {
      readonly ok: false
      readonly error: { readonly code: ErrorCode; readonly message: string; readonly details?: unknown }
    }
