import { z } from 'zod'

/**
 * Columns of numbers travel as typed arrays beside the JSON (see wire.ts). The schema checks kind and length only; a
 * plain loop checks values where that matters.
 */
export const float64Column = z.custom<Float64Array>((value) => value instanceof Float64Array)
export const uint32Column = z.custom<Uint32Array>((value) => value instanceof Uint32Array)
export const bytesColumn = z.instanceof(Uint8Array)
