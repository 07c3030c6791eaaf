import { AppError } from '../contract/errors.ts'
import type { Run } from '../contract/shapes/run.ts'
import { PATTERNS_PER_BLOCK } from '../engine/simulate/pattern-set.ts'
import { curveSoFar } from './curve-so-far.ts'
import { DeskAnswer } from './desk-answer.ts'
import type { DeskContext } from './desk-context.ts'
import { deskPool } from './desk-pool.ts'
import { loadNetlist, type NetlistInput } from './load-netlist.ts'
import { slicePatterns, unpackPatterns } from './packed-patterns.ts'
import { runFigures } from './run-figures.ts'
import { packSegment, ProfileSum, unpackSegment } from './run-segment.ts'

export type SimulateJob = {
  readonly input: {
    readonly netlistKey: string
    readonly netlist: NetlistInput
    readonly patterns: readonly Uint8Array[]
    readonly detectionLimit: number
    /** The segments that an earlier attempt has left, each in parts, in order. */
    readonly segments: readonly (readonly Uint8Array[])[]
  }
  readonly output: { readonly figures: NonNullable<Run['figures']> }
  /** One part of a segment that has been simulated. With the last one a later attempt can go on from its end. */
  readonly part: {
    readonly segment: number
    readonly part: number
    readonly bytes: Uint8Array<ArrayBuffer>
    /** How the run stands after the segment; null for all parts but the last. */
    readonly standing: {
      readonly patternsDone: number
      readonly figures: NonNullable<Run['figures']>
      /** Faults detected after each pattern so far; length patternsDone + 1. */
      readonly curve: Float64Array<ArrayBuffer>
    } | null
  }
}

/** A segment is to take about so long: it is what a kill at the worst moment costs. */
const SEGMENT_SECONDS = 1
/** The matrix is kept while it needs no more memory than this. */
const MOST_MATRIX_BYTES = 512 * 1024 * 1024

/**
 * Simulates a pattern set in segments, each handed over as soon as it is done. The result does not depend on where segments
 * begin and end: a run that was resumed has the same as one that was not.
 */
export async function simulateJob(
  input: SimulateJob['input'],
  context: DeskContext<SimulateJob['part']>,
): Promise<DeskAnswer<SimulateJob['output']>> {
  context.report({ phase: 'Reading the netlist', share: null })
  const { netlist, faults } = await loadNetlist(input.netlistKey, input.netlist)
  const patterns = unpackPatterns(input.patterns)
  const { nPatterns } = patterns
  const { detectionLimit } = input
  const wantMatrix = detectionLimit === 0 && (faults.nClasses * nPatterns) / 8 <= MOST_MATRIX_BYTES

  const sum = new ProfileSum(faults.nClasses, detectionLimit)
  let done = 0
  for (const parts of input.segments) {
    const segment = unpackSegment(parts)
    sum.add(segment)
    done = segment.first + segment.count
  }
  const pool = await deskPool(context.threads)
  let blocks = 1
  for (let segment = input.segments.length; done < nPatterns; segment++) {
    const first = done
    const to = Math.min(nPatterns, first + blocks * PATTERNS_PER_BLOCK)
    const startedAt = performance.now()
    const outcome = await pool.run(
      {
        circuit: netlist.circuit,
        faults,
        patterns: slicePatterns(patterns, first, to),
        detectionLimit,
        classes: detectionLimit === 0 ? null : classesLeft(faults.nClasses, sum),
        wantMatrix,
      },
      {
        signal: context.signal,
        onProgress: (progress) =>
          context.report({
            phase: progress.phase === 'packing' ? 'Preparing' : 'Simulating',
            share: (first + progress.done) / nPatterns,
            rate: progress.pairsPerSecond,
          }),
      },
    )
    if (outcome.state === 'cancelled') throw new AppError('cancelled')
    const finished = { first, count: to - first, result: outcome.result }
    sum.add(finished)
    done = to
    const parts = packSegment(finished)
    const profile = sum.profile()
    const curve = curveSoFar(faults, profile)
    const standing = { patternsDone: done, figures: runFigures(faults, profile), curve }
    parts.forEach((bytes, part) => {
      const isLast = part === parts.length - 1
      context.send({ segment, part, bytes, standing: isLast ? standing : null }, [
        bytes.buffer,
        ...(isLast ? [curve.buffer] : []),
      ])
    })
    const seconds = (performance.now() - startedAt) / 1000
    blocks = Math.max(1, Math.min(4 * blocks, Math.floor((blocks * SEGMENT_SECONDS) / seconds)))
  }
  return new DeskAnswer({ figures: runFigures(faults, sum.profile()) })
}

function classesLeft(nClasses: number, sum: ProfileSum): Uint32Array {
  return Uint32Array.from({ length: nClasses }, (_, group) => group).filter((group) => !sum.isDone(group))
}
