import { NetlistWriter } from './netlist-writer.ts'

/**
 * Fern, the arithmetic of a greenhouse's sensor chip: a 16 × 16 array multiplier, a 40-bit accumulator, a limiter and
 * a comparator with a stored threshold.
 */
export function writeFern(): string {
  const w = new NetlistWriter()
  const sample = w.input('sample', 16)
  const gain = w.input('gain', 16)
  const [clear = '', hold = '', store = ''] = w.input('mode', 3)

  w.within('multiply')
  const product = multiply(w, sample, gain)

  w.within('accumulate')
  const total = w.register('total', 40)
  const wide = [...product, ...Array.from({ length: 8 }, () => w.and(product[31] ?? '', w.not(hold)))]
  const sum = w.add(total, wide).slice(0, 40)
  const kept = w.muxBus(hold, total, sum)
  const keep = w.not(clear)
  w.load(total, kept.map((net) => w.and(net, keep))) // prettier-ignore

  w.within('limit')
  const high = total.slice(32)
  const over = w.or(...high)
  const limited = total.slice(8, 32).map((net) => w.or(net, over))

  w.within('compare')
  const threshold = w.register('threshold', 24)
  w.load(threshold, w.muxBus(store, limited, threshold))
  const above = w.greater(limited, threshold)
  const below = w.greater(threshold, limited)
  const alarm = w.register('alarm', 4)
  w.load(alarm, [
    above,
    w.and(alarm[0] ?? '', above),
    w.and(alarm[1] ?? '', above),
    w.or(alarm[2] ?? '', w.and(below, clear)),
  ])

  w.output('level', limited)
  w.output('alarm', alarm)
  return w.text('fern: sensor arithmetic of a greenhouse chip')
}

/** Moss, the watering sequencer: four loadable timers, a state machine, an arbiter with fixed priority, a check sum. */
export function writeMoss(): string {
  const w = new NetlistWriter()
  const request = w.input('request', 8)
  const period = w.input('period', 16)
  const select = w.input('select', 2)
  const [write = '', enable = '', stop = ''] = w.input('control', 3)

  w.within('timers')
  const chosen = w.decode(select)
  const expired = chosen.map((timer, index) => {
    const count = w.register(`count${index}`, 16)
    const reload = w.and(timer, write)
    const { less, zero } = w.decrement(count)
    const step = w.and(enable, w.not(zero))
    w.load(count, w.muxBus(reload, period, w.muxBus(step, less, count)))
    return w.and(zero, enable)
  })

  w.within('arbiter')
  const pending = w.register('pending', 8)
  const grant: string[] = []
  let free = w.not(stop)
  pending.forEach((net, index) => {
    const granted = w.and(net, free, w.or(expired[index % 4] ?? '', request[index] ?? ''))
    grant.push(granted)
    free = w.and(free, w.not(granted))
  })
  w.load(pending, pending.map((net, index) => w.or(request[index] ?? '', w.and(net, w.not(grant[index] ?? ''))))) // prettier-ignore

  w.within('sequence')
  const state = w.register('state', 4)
  const steps = w.decode(state)
  const some = w.or(...grant)
  const step = w.or(some, w.and(expired[0] ?? '', enable))
  const advanced = w.add(state, [step, ...state.slice(1).map(() => w.and(w.not(step), stop))]).slice(0, 4)
  const restart = w.or(w.and(steps[12] ?? '', expired[1] ?? ''), w.and(steps[9] ?? '', expired[2] ?? ''))
  const next = advanced.map((net) => w.and(net, w.not(restart)))
  w.load(state, next)
  const valve = steps.map((step, index) => w.and(step, grant[index % 8] ?? '', w.not(stop)))

  w.within('check')
  const sum = w.register('sum', 16)
  const feedback = w.xor(sum[15] ?? '', w.xor(some, valve[3] ?? ''))
  w.load(
    sum,
    sum.map((_, bit) => {
      // prettier-ignore
      const shifted = bit === 0 ? feedback : (sum[bit - 1] ?? '')
      const tapped = bit === 5 || bit === 12 ? w.xor(shifted, feedback) : shifted
      return w.xor(tapped, w.and(valve[bit] ?? '', enable))
    }),
  )
  const wrong = w.nor(...sum)

  w.output('valve', valve)
  w.output('wrong', [wrong])
  return w.text('moss: watering sequencer of a greenhouse chip')
}

/** Array multiplier without sign, one row of adders for each bit of b. */
function multiply(w: NetlistWriter, a: readonly string[], b: readonly string[]): string[] {
  const partial = b.map((bit) => a.map((net) => w.and(net, bit)))
  const product: string[] = []
  let row = partial[0] ?? []
  for (const next of partial.slice(1)) {
    product.push(row[0] ?? '')
    const shifted = row.slice(1)
    const sum: string[] = []
    let carry: string | null = null
    next.forEach((net, bit) => {
      const above = shifted[bit]
      if (above === undefined) {
        const stage: { sum: string; carry: string } =
          carry === null ? { sum: net, carry: '' } : w.halfAdder(net, carry)
        sum.push(stage.sum)
        carry = stage.carry === '' ? null : stage.carry
        return
      }
      const stage: { sum: string; carry: string } =
        carry === null ? w.halfAdder(net, above) : w.fullAdder(net, above, carry)
      sum.push(stage.sum)
      carry = stage.carry
    })
    row = carry === null ? sum : [...sum, carry]
  }
  return [...product, ...row]
}
