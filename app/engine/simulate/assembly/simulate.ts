import { threeValued } from './block'
import { simulateRegionTwoValued, simulateTapsTwoValued } from './two-valued-regions'
import { simulateRegionThreeValued, simulateTapsThreeValued } from './three-valued-regions'
import { workDone } from './work'

/**
 * Simulates the faults of regions `from` − 1 downwards as far as `to`, but stops after so much work; returns the last
 * region done. Where all detections count, every later region must have been done in this block.
 */
export function simulateRegions(from: u32, to: u32, budget: u32): u32 {
  const end = workDone + budget
  let region = from
  while (region > to && workDone < end) {
    region--
    if (threeValued) simulateRegionThreeValued(region)
    else simulateRegionTwoValued(region)
  }
  return region
}

/** Simulates the faults on flip-flops' data pins and output taps, which one response row alone observes. */
export function simulateTaps(): void {
  if (threeValued) simulateTapsThreeValued()
  else simulateTapsTwoValued()
}
