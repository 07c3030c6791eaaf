import { AppError } from '../contract/errors.ts'
import { DeskAnswer } from './desk-answer.ts'
import type { DeskContext } from './desk-context.ts'
import { loadNetlist } from './load-netlist.ts'
import { unpackPatterns } from './packed-patterns.ts'
import type { HoldRunInput } from './plan-jobs.ts'
import { holdDossier } from './run-dossier.ts'
import { joinMatrices, ProfileSum, unpackSegment } from './run-segment.ts'

/** Puts a finished run on the desk, where views, ceilings and exports of it are worked out. */
export async function holdRunJob(
  input: HoldRunInput,
  context: DeskContext<never>,
): Promise<DeskAnswer<null>> {
  const { key, netlistKey, detectionLimit } = input
  context.report({ phase: 'Opening the run', share: null })
  const { netlist, faults } = await loadNetlist(netlistKey, input.netlist)
  const patterns = unpackPatterns(input.patterns)
  const segments = input.segments.map(unpackSegment)
  const sum = new ProfileSum(faults.nClasses, detectionLimit)
  for (const segment of segments) sum.add(segment)
  const profile = sum.profile()
  const matrix = joinMatrices(segments, profile)
  if (matrix === null) {
    throw new AppError(
      'out-of-reach',
      'This run kept no record of which pattern detects which fault: it was started with a limit of detections, or the record would have needed more than 512 MB. Orders can not be worked out from it.',
    )
  }
  const empty = { bases: new Map(), orders: new Map(), curves: new Map() }
  holdDossier(key, { netlist, faults, patterns, profile, matrix, ...empty })
  return new DeskAnswer(null)
}
