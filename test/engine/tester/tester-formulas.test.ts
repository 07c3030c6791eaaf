import { describe, expect, test } from 'vitest'
import { correctionFactor, withGuardBand } from '../../../app/engine/tester/measured-time.ts'
import { perDeviceMs, touchdownMs } from '../../../app/engine/tester/multi-site.ts'
import { balancedChainLength, chainTestCycles } from '../../../app/engine/tester/scan-cycles.ts'
import { meanTimeStopAtFirstFail } from '../../../app/engine/tester/stop-at-first-fail.ts'
import {
  capacityHours,
  costOfTime,
  hoursOfUse,
  testedDevices,
} from '../../../app/engine/tester/tester-hours.ts'
import { reloadsNeeded } from '../../../app/engine/tester/vector-memory.ts'

describe('scan', () => {
  test('chains are as long as balance allows: 10 flip-flops in 4 chains make one of 3', () => {
    expect(balancedChainLength(10, 4)).toBe(3)
  })

  // Source: Bushnell & Agrawal 2000 (from memory): a chain test of L + 4 cycles.
  test('the chain test fills the chain and shifts four bits more', () => {
    expect(chainTestCycles(2000)).toBe(2004)
  })
})

describe('multi-site', () => {
  // Common practice, no source. By hand: 400 × (1 + 7 × 0.05) = 540; (540 + 200) / 8 = 92.5.
  test('on 8 sites at 0.95 takes 540 ms a touchdown, 92.5 ms a device', () => {
    expect(touchdownMs(400, 8, 0.95)).toBeCloseTo(540, 9)
    expect(perDeviceMs(400, 8, 0.95, 200)).toBeCloseTo(92.5, 9)
  })

  test('on one site is the program and the index time', () => {
    expect(perDeviceMs(400, 1, 0.5, 200)).toBe(600)
  })

  // Common practice, no source. By hand: 92.5 / 3,600,000 × 60 = 0.00154166…
  test('costs 0.0015417 a device at 60 an hour', () => {
    expect(costOfTime(92.5, 60)).toBeCloseTo(0.0015417, 7)
  })
})

describe('tested against shipped', () => {
  // Common practice, no source. By hand: 0.8^0.95 = e^(0.95 ln 0.8) = 0.80897; 1,000,000 / 0.80897 = 1,236,131.
  test('at a yield of 0.8 and a coverage of 0.95, a million shipped take 1,236,131 tests', () => {
    expect(Math.round(testedDevices(1_000_000, 0.8 ** 0.95, 0))).toBe(1_236_131)
  })

  test('counts retests on top', () => {
    expect(testedDevices(800, 0.8, 0.1)).toBeCloseTo(1100, 9)
  })

  // By hand: 36,000 devices × 1 s = 10 h of use; at a utilisation of 0.8 that needs 12.5 h of tester.
  test('turns into hours of use, and into the hours that must stand ready', () => {
    expect(hoursOfUse(36_000, 1000)).toBe(10)
    expect(capacityHours(10, 0.8)).toBeCloseTo(12.5, 12)
  })
})

describe('vector memory', () => {
  test.each([
    [1000, 1000, 0],
    [1001, 1000, 1],
    [2000, 1000, 1],
    [2001, 1000, 2],
    [0, 1000, 0],
  ])('of %d cycles in %d takes %d reloads', (used, depth, reloads) => {
    expect(reloadsNeeded(used, depth)).toBe(reloads)
  })

  test('without a limit never reloads', () => {
    expect(reloadsNeeded(1e12, null)).toBe(0)
  })
})

describe('stop at the first fail', () => {
  // By hand, formula of common practice: steps 10, 20, 30 ms; T before each 0, 0.5, 0.8; Y = 0.5.
  // One site: 10 + 20 × 0.5^0.5 + 30 × 0.5^0.8 = 10 + 14.14214 + 17.23048 = 41.37261.
  test('on one site each step runs while the device still passes', () => {
    const mean = meanTimeStopAtFirstFail(Float64Array.of(10, 20, 30), Float64Array.of(0, 0.5, 0.8), 0.5, 1)
    expect([...mean].map((ms) => Number(ms.toFixed(4)))).toEqual([0, 10, 24.1421, 41.3726])
  })

  // By hand on 2 sites: 1 − (1 − 0.70711)² = 0.91421; 1 − (1 − 0.57435)² = 0.81882; 10 + 18.28427 + 24.56464.
  test('on two sites each step runs while either passes', () => {
    const mean = meanTimeStopAtFirstFail(Float64Array.of(10, 20, 30), Float64Array.of(0, 0.5, 0.8), 0.5, 2)
    expect(mean[3]).toBeCloseTo(52.8489, 3)
  })

  test('saves nothing at a yield of 1', () => {
    expect(meanTimeStopAtFirstFail(Float64Array.of(10, 20), Float64Array.of(0, 0.9), 1, 4)[2]).toBe(30)
  })
})

describe('measured time', () => {
  test('of 11 ms against 10 computed gives a factor of 1.1, and 5 % in hand give 11.55', () => {
    expect(correctionFactor(11, 10)).toBeCloseTo(1.1, 12)
    expect(withGuardBand(11, 0.05)).toBeCloseTo(11.55, 12)
  })

  test('says nothing where nothing was computed', () => {
    expect(correctionFactor(11, 0)).toBe(1)
  })
})
