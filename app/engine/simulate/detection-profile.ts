/** The states in which a fault can stand, as they are written in files and on screens. */
export const FAULT_STATES = [
  'detected',
  'possibly detected',
  'not detected',
  'proven untestable',
  'not decided',
  'by the chain test',
] as const

export type FaultState = (typeof FAULT_STATES)[number]

/**
 * What a pattern set detects, per fault class of one fault list. Columns have length nClasses.
 */
export type DetectionProfile = {
  readonly nClasses: number
  readonly nPatterns: number
  /** Detections at which a fault was no longer simulated: 1 first detection, N up to N, 0 every detection counted. */
  readonly detectionLimit: number
  /** The first pattern that detects the class, from 0; −1 where none does. */
  readonly first: Int32Array
  /** How many patterns detect it, at most detectionLimit unless that is 0. */
  readonly detections: Uint32Array
  /** 1 where no pattern detects it but for some an observed output's good value is known and the faulty one X. */
  readonly possibly: Uint8Array
}

/**
 * Which patterns detect which fault class: one row for each class that some pattern detects. Row-major bits as in a
 * BitPlane; kept only where asked for, and only while its size stays under the limit that the caller sets.
 */
export type DetectionMatrix = {
  readonly nPatterns: number
  readonly nRows: number
  readonly wordsPerRow: number
  /** Length nRows: the class of each row, ascending. */
  readonly classOfRow: Uint32Array
  /** Length nRows × wordsPerRow; may live in a SharedArrayBuffer. */
  readonly words: Uint32Array
}
