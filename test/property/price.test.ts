import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { chooseCut, type Limit, usedOf } from '../../app/engine/choose/budget.ts'
import { priceOrder, type Pricing } from '../../app/engine/choose/price.ts'
import { agrawalSethAgrawal, williamsBrown } from '../../app/engine/quality/defect-level.ts'
import { DEFAULT_PRODUCT } from '../../app/engine/quality/product.ts'
import { DEFAULT_TESTER } from '../../app/engine/tester/tester.ts'
import { buildTimeModel, timeColumns } from '../../app/engine/tester/time-model.ts'

const rate = fc.integer({ min: 1, max: 400 })
const setting = fc
  .record({
    counts: fc.array(fc.integer({ min: 1, max: 6 }), { minLength: 1, maxLength: 4 }),
    flipFlops: fc.integer({ min: 0, max: 30 }),
    chains: fc.integer({ min: 1, max: 4 }),
    captureCycles: fc.integer({ min: 0, max: 3 }),
    chainTest: fc.boolean(),
    shiftMHz: rate,
    captureMHz: rate,
    setupMs: fc.integer({ min: 0, max: 5 }),
    vectorMemory: fc.option(fc.integer({ min: 1, max: 300 })),
    reloadMs: fc.option(fc.integer({ min: 0, max: 9 })),
    sites: fc.integer({ min: 1, max: 8 }),
    shuffle: fc.array(fc.double({ min: 0, max: 1, noNaN: true }), { minLength: 24, maxLength: 24 }),
    gains: fc.array(fc.integer({ min: 0, max: 9 }), { minLength: 24, maxLength: 24 }),
    given: fc.array(fc.constantFrom(0, 0, 7, 12), { minLength: 24, maxLength: 24 }),
  })
  .map((drawn) => {
    let first = 0
    const bursts = drawn.counts.map((count, at) => {
      const burst = { name: `b${at}`, first, count }
      first += count
      return burst
    })
    const nPatterns = first
    const sequence = Uint32Array.from({ length: nPatterns }, (_, p) => p).sort(
      (a, b) => drawn.shuffle[a] - drawn.shuffle[b],
    )
    const tester = { ...DEFAULT_TESTER, ...drawn }
    const product = { ...DEFAULT_PRODUCT, ...drawn, shippedPerYear: 1000, escapeCost: 5 }
    const patterns = { nPatterns, bursts, cycles: Uint32Array.from(drawn.given.slice(0, nPatterns)) }
    const time = buildTimeModel(tester, product, patterns, {
      flipFlops: drawn.flipFlops,
      tracedChains: null,
      tracedLongest: null,
    })
    const detected = new Float64Array(nPatterns + 1)
    for (let k = 0; k < nPatterns; k++) detected[k + 1] = detected[k] + drawn.gains[k]
    const curve = { detected, total: detected[nPatterns] + 3 }
    const pricing: Pricing = { tester, product, time, trueYield: 0.8, restMs: 11 }
    const priced = priceOrder(
      sequence,
      detected.map((weight) => weight / curve.total),
      pricing,
    )
    return { ...drawn, bursts, patterns, sequence, tester, product, time, curve, priced }
  })

describe('a priced order', () => {
  test('counts the cycles and times that each burst takes by itself', () => {
    fc.assert(
      fc.property(setting, (drawn) => {
        const { bursts, sequence, flipFlops, chains, product, tester, patterns, priced } = drawn
        const length = flipFlops > 0 ? Math.ceil(flipFlops / chains) : 0
        for (let k = 0; k <= sequence.length; k++) {
          const running = [...sequence.subarray(0, k)]
          let plain = length > 0 && product.chainTest && k > 0 ? length + 4 : 0
          let capture = 0
          let setupMs = 0
          for (const { first, count } of bursts) {
            const own = running.filter((p) => p >= first && p < first + count)
            if (own.length === 0) continue
            setupMs += product.setupMs
            // The unload is paid by a burst that holds any pattern whose cycles are not given.
            const loads = Array.from({ length: count }, (_, at) => patterns.cycles[first + at]).includes(0)
            const modelled = own.filter((p) => patterns.cycles[p] === 0).length
            plain += own.reduce((sum, p) => sum + patterns.cycles[p], 0)
            plain += length > 0 ? (modelled + (loads ? 1 : 0)) * length : modelled
            capture += length > 0 ? modelled * product.captureCycles : 0
          }
          expect(priced.cycles[k]).toBe(plain + capture)
          const ms = plain / (tester.shiftMHz * 1000) + capture / (tester.captureMHz * 1000) + setupMs
          expect(priced.milliseconds[k]).toBeCloseTo(ms, 9)
        }
      }),
      { seed: 1 },
    )
  })

  test('grows in time and cost, and falls in escapes, with every pattern', () => {
    fc.assert(
      fc.property(setting, ({ priced, sequence }) => {
        for (let k = 1; k <= sequence.length; k++) {
          for (const column of [
            'cycles',
            'milliseconds',
            'perDeviceMilliseconds',
            'vectorMemory',
            'reloads',
          ] as const) {
            expect(priced[column][k]).toBeGreaterThanOrEqual(priced[column][k - 1])
          }
          expect(priced.dppm[k]).toBeLessThanOrEqual(priced.dppm[k - 1])
          expect(priced.dppmLow[k]).toBeLessThanOrEqual(priced.dppm[k])
          expect(priced.dppmHigh[k]).toBeGreaterThanOrEqual(priced.dppm[k])
          expect(priced.meanMilliseconds[k]).toBeLessThanOrEqual(priced.milliseconds[k] * (1 + 1e-12))
        }
      }),
      { seed: 2 },
    )
  })

  test('takes the same whatever the order of the same patterns', () => {
    fc.assert(
      fc.property(setting, ({ time, sequence, product }) => {
        const sorted = sequence.slice().sort()
        const last = sequence.length
        const one = timeColumns(time, sequence, false, product.otherCycles)
        const other = timeColumns(time, sorted, false, product.otherCycles)
        expect(one.cycles[last]).toBe(other.cycles[last])
        expect(one.milliseconds[last]).toBeCloseTo(other.milliseconds[last], 12)
      }),
      { seed: 3 },
    )
  })
})

describe('a cut', () => {
  const kinds = ['patterns', 'cycles', 'milliseconds', 'deviceMilliseconds'] as const

  test('is the longest prefix that fits, found by trying each', () => {
    fc.assert(
      fc.property(
        setting,
        fc.constantFrom(...kinds),
        fc.nat(24),
        fc.boolean(),
        (drawn, kind, place, exactly) => {
          const { curve, priced, sequence } = drawn
          const at = Math.min(place, sequence.length)
          const most = usedOf({ kind, most: 0 }, at, priced) * (exactly ? 1 : 1.001)
          const limit: Limit = { kind, most }
          const mayCut = new Uint8Array(sequence.length + 1).fill(1)
          const { patterns } = chooseCut({
            curve,
            priced,
            chosen: sequence.length,
            mayCut,
            limits: [limit],
            goals: [],
          })
          let longest = 0
          for (let k = 0; k <= sequence.length; k++) {
            if (usedOf(limit, k, priced) <= most && priced.isOverMemory[k] === 0) longest = k
          }
          expect(patterns).toBe(longest)
        },
      ),
      { seed: 4 },
    )
  })

  test('for a goal is the shortest prefix that meets it, found by trying each', () => {
    fc.assert(
      fc.property(
        setting,
        fc.double({ min: 0, max: 1, noNaN: true }),
        ({ curve, priced, sequence }, least) => {
          const mayCut = new Uint8Array(sequence.length + 1).fill(1)
          const goals = [{ kind: 'coverage', least } as const]
          const { patterns, unmet } = chooseCut({
            curve,
            priced,
            chosen: sequence.length,
            mayCut,
            limits: [],
            goals,
          })
          const fits = [...sequence.keys(), sequence.length].filter((k) => priced.isOverMemory[k] === 0)
          const meeting = fits.filter((k) => curve.detected[k] / curve.total >= least)
          expect(unmet.length === 0).toBe(meeting.length > 0)
          if (meeting.length > 0) expect(patterns).toBe(meeting[0])
          else expect(curve.detected[patterns]).toBe(Math.max(...fits.map((k) => curve.detected[k])))
        },
      ),
      { seed: 5 },
    )
  })
})

// Source: the formulas of Williams & Brown 1981 and of Agrawal, Seth & Agrawal 1982 themselves.
test('both defect levels lie within 0 and 1 − Y and fall with coverage, yield and n0', () => {
  const unit = fc.double({ min: 0.001, max: 1, noNaN: true })
  const n0 = fc.double({ min: 1, max: 20, noNaN: true })
  fc.assert(
    fc.property(unit, unit, unit, unit, n0, n0, (ya, yb, ta, tb, na, nb) => {
      const [y, betterY] = [Math.min(ya, yb), Math.max(ya, yb)]
      const [t, betterT] = [Math.min(ta, tb), Math.max(ta, tb)]
      const [n, betterN] = [Math.min(na, nb), Math.max(na, nb)]
      const slack = 1e-12
      for (const level of [williamsBrown(y, t), agrawalSethAgrawal(y, t, n)]) {
        expect(level).toBeGreaterThanOrEqual(0)
        expect(level).toBeLessThanOrEqual(1 - y + slack)
      }
      expect(williamsBrown(betterY, betterT)).toBeLessThanOrEqual(williamsBrown(y, t) + slack)
      const best = agrawalSethAgrawal(betterY, betterT, betterN)
      expect(best).toBeLessThanOrEqual(agrawalSethAgrawal(y, t, n) + slack)
    }),
    { seed: 6 },
  )
})
