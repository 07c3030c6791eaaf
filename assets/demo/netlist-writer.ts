/** Writes a gate-level netlist in `.bench` form, gate by gate; nets are named `block/name`. */
export class NetlistWriter {
  private readonly declarations: string[] = []
  private readonly gates: string[] = []
  private count = 0
  private block = ''

  /** Names the block to which the nets that follow belong. */
  within(block: string): void {
    this.block = `${block}/`
    this.count = 0
  }

  input(name: string, width: number): string[] {
    return this.bus(name, width, (net) => this.declarations.push(`INPUT(${net})`))
  }

  output(name: string, nets: readonly string[]): void {
    nets.forEach((net, bit) => {
      const port = `${name}[${bit}]`
      this.gates.push(`${port} = BUFF(${net})`)
      this.declarations.push(`OUTPUT(${port})`)
    })
  }

  /** Flip-flops whose data nets are given later by `load`. */
  register(name: string, width: number): string[] {
    return Array.from({ length: width }, (_, bit) => `${this.block}${name}[${bit}]`)
  }

  load(register: readonly string[], data: readonly string[]): void {
    register.forEach((net, bit) => this.gates.push(`${net} = DFF(${data[bit]})`))
  }

  private gate(kind: string, pins: readonly string[]): string {
    const net = `${this.block}n${this.count++}`
    this.gates.push(`${net} = ${kind}(${pins.join(', ')})`)
    return net
  }

  not = (a: string): string => this.gate('NOT', [a])
  and = (...pins: string[]): string => this.gate('AND', pins)
  nand = (...pins: string[]): string => this.gate('NAND', pins)
  or = (...pins: string[]): string => this.gate('OR', pins)
  nor = (...pins: string[]): string => this.gate('NOR', pins)

  /** Exclusive or of four NAND gates, as cell libraries build it. */
  xor(a: string, b: string): string {
    const shared = this.nand(a, b)
    return this.nand(this.nand(a, shared), this.nand(b, shared))
  }

  /** `chosen` where select is 1, else `other`. */
  mux(select: string, chosen: string, other: string): string {
    return this.nand(this.nand(select, chosen), this.nand(this.not(select), other))
  }

  muxBus(select: string, chosen: readonly string[], other: readonly string[]): string[] {
    return chosen.map((net, bit) => this.mux(select, net, other[bit] ?? net))
  }

  fullAdder(a: string, b: string, carry: string): { sum: string; carry: string } {
    const half = this.xor(a, b)
    return { sum: this.xor(half, carry), carry: this.nand(this.nand(a, b), this.nand(half, carry)) }
  }

  halfAdder(a: string, b: string): { sum: string; carry: string } {
    return { sum: this.xor(a, b), carry: this.and(a, b) }
  }

  /** Ripple-carry sum of two buses of one width; the carry out stands last. */
  add(a: readonly string[], b: readonly string[]): string[] {
    const sum: string[] = []
    let carry: string | null = null
    a.forEach((net, bit) => {
      const other = b[bit] ?? net
      const stage: { sum: string; carry: string } =
        carry === null ? this.halfAdder(net, other) : this.fullAdder(net, other, carry)
      sum.push(stage.sum)
      carry = stage.carry
    })
    return carry === null ? sum : [...sum, carry]
  }

  /** One less than the bus, and a net that is 1 where the bus is zero. */
  decrement(bus: readonly string[]): { less: string[]; zero: string } {
    let borrow: string | null = null
    const less = bus.map((net) => {
      const bit: string = borrow === null ? this.not(net) : this.xor(net, borrow)
      borrow = borrow === null ? this.not(net) : this.and(borrow, this.not(net))
      return bit
    })
    return { less, zero: this.nor(...bus) }
  }

  /** 1 where a is greater than b, both without sign. */
  greater(a: readonly string[], b: readonly string[]): string {
    let result = this.and(a[0] ?? '', this.not(b[0] ?? ''))
    for (let bit = 1; bit < a.length; bit++) {
      const more = this.and(a[bit] ?? '', this.not(b[bit] ?? ''))
      const equal = this.not(this.xor(a[bit] ?? '', b[bit] ?? ''))
      result = this.or(more, this.and(equal, result))
    }
    return result
  }

  /** All 2^n products of n nets and their complements. */
  decode(bus: readonly string[]): string[] {
    const inverted = bus.map((net) => this.not(net))
    return Array.from({ length: 1 << bus.length }, (_, code) =>
      this.and(...bus.map((net, bit) => ((code >> bit) & 1 ? net : (inverted[bit] ?? net)))),
    )
  }

  text(title: string): string {
    return [`# ${title}`, ...this.declarations, ...this.gates, ''].join('\n')
  }

  private bus(name: string, width: number, declare: (net: string) => void): string[] {
    const nets = Array.from({ length: width }, (_, bit) => (width === 1 ? name : `${name}[${bit}]`))
    nets.forEach(declare)
    return nets
  }
}
