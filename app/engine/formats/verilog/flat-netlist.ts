import { IntList } from '../../circuit/int-list.ts'
import type { Source } from '../../source/source.ts'
import type { NameTable } from './name-table.ts'
import type { ParsedModule } from './parsed-module.ts'
import { SignalFlag } from './parsed-module.ts'

const NO_INDEX = -(2 ** 31)

/** Fixed nets that every flat netlist begins with. */
export const FlatNet = { Zero: 0, One: 1, Unknown: 2 } as const

/**
 * A netlist without hierarchy: nets, and what stands between them, in the order of the text. Columns run in parallel;
 * places are offsets into the source of the module that the row's scope is an instance of.
 */
export class FlatNetlist {
  readonly names: NameTable
  /** Instances of modules; scope 0 is the top. */
  readonly scopeParent: IntList = new IntList()
  readonly scopeName: IntList = new IntList()
  readonly scopeModules: ParsedModule[] = []

  readonly netScope: IntList = new IntList(1024)
  readonly netName: IntList = new IntList(1024)
  private readonly netIndex = new IntList(1024)
  /** 0, or the number of an inner net within its statement. */
  private readonly netInner = new IntList(1024)
  readonly netPlace: IntList = new IntList(1024)

  /** Gates, each `gateInputs` from its start to the next one's. */
  readonly gateKind: IntList = new IntList(1024)
  readonly gateNet: IntList = new IntList(1024)
  readonly gateStart: IntList = new IntList(1024)
  readonly gateInputs: IntList = new IntList(4096)
  readonly gateScope: IntList = new IntList(1024)
  readonly gatePlace: IntList = new IntList(1024)

  /** Plain assignments: target, source, scope, place. */
  readonly connects: IntList = new IntList()
  /** Three-state gates: output, data, control, flags, scope, place. */
  readonly threeState: IntList = new IntList()
  /** Flip-flops written as such: clock, output, data, scope, place. */
  readonly flipFlops: IntList = new IntList()

  /** Library cells: index of the cell, its pins' nets from `cellStart` on (−1: open), scope, instance name, place. */
  readonly cell: IntList = new IntList(1024)
  readonly cellStart: IntList = new IntList(1024)
  readonly cellPins: IntList = new IntList(4096)
  readonly cellScope: IntList = new IntList(1024)
  readonly cellName: IntList = new IntList(1024)
  readonly cellPlace: IntList = new IntList(1024)

  /** Instances of what nobody defined: module name, scope, instance name, place, first and end of `boxNets`. */
  readonly boxes: IntList = new IntList()
  readonly boxNets: IntList = new IntList()

  /** Bits of the top module's ports, in the order of their declaration. */
  readonly inputs: IntList = new IntList()
  readonly outputs: IntList = new IntList()
  readonly inouts: IntList = new IntList()

  constructor(names: NameTable) {
    this.names = names
    for (let net = 0; net < 3; net++) this.addNet(0, -1, NO_INDEX, 0, 0)
  }

  get nNets(): number {
    return this.netScope.length
  }

  addScope(module: ParsedModule, parent: number, name: number): number {
    this.scopeParent.push(parent)
    this.scopeName.push(name)
    this.scopeModules.push(module)
    return this.scopeModules.length - 1
  }

  private addNet(scope: number, name: number, index: number, inner: number, place: number): number {
    this.netScope.push(scope)
    this.netName.push(name)
    this.netIndex.push(index)
    this.netInner.push(inner)
    this.netPlace.push(place)
    return this.netScope.length - 1
  }

  /** A new net for a local bit of a module's instance. */
  addBit(module: ParsedModule, scope: number, bit: number): number {
    const signal = module.bitSignal.data[bit]
    if (signal >= 0) {
      const isVector = module.signalIsVector.data[signal] !== 0
      const index = isVector ? module.bitIndex.data[bit] : NO_INDEX
      return this.addNet(scope, module.signalName.data[signal], index, 0, module.signalPlace.data[signal])
    }
    const inner = module.bitIndex.data[bit]
    const code = -2 - signal
    if ((code & 1) === 1) return this.addNet(scope, code >> 1, NO_INDEX, inner, module.place)
    const owner = code >> 1
    const ownerSignal = module.bitSignal.data[owner]
    const index = module.signalIsVector.data[ownerSignal] !== 0 ? module.bitIndex.data[owner] : NO_INDEX
    return this.addNet(
      scope,
      module.signalName.data[ownerSignal],
      index,
      inner,
      module.signalPlace.data[ownerSignal],
    )
  }

  sourceOf(scope: number): Source {
    return this.scopeModules[scope].source
  }

  /** The net's name: scope, name, index, and for an inner net its number. */
  netText(net: number): string {
    if (net === FlatNet.Zero) return "1'b0"
    if (net === FlatNet.One) return "1'b1"
    if (net === FlatNet.Unknown) return "1'bx"
    const scope = this.netScope.data[net]
    const name = this.names.text(this.netName.data[net])
    const index = this.netIndex.data[net]
    const inner = this.netInner.data[net]
    const text = index === NO_INDEX ? this.plainName(scope, name) : `${name}[${index}]`
    return `${this.scopeText(scope)}${text}${inner === 0 ? '' : `:${inner}`}`
  }

  /** An escaped name that reads like a bit of a vector in the same module keeps its backslash. */
  private plainName(scope: number, name: string): string {
    if (name.charCodeAt(name.length - 1) !== 93) return name
    return this.isVectorBit(this.scopeModules[scope], name) ? `\\${name}` : name
  }

  private isVectorBit(module: ParsedModule, name: string): boolean {
    const bracket = name.lastIndexOf('[')
    const index = Number(name.slice(bracket + 1, -1))
    if (bracket < 1 || !Number.isInteger(index)) return false
    return this.vectorsOf(module).has(name.slice(0, bracket))
  }

  private readonly vectors = new Map<ParsedModule, Set<string>>()

  private vectorsOf(module: ParsedModule): Set<string> {
    let vectors = this.vectors.get(module)
    if (vectors === undefined) {
      vectors = new Set()
      for (let signal = 0; signal < module.nSignals; signal++) {
        if (module.signalIsVector.data[signal] === 0) continue
        vectors.add(this.names.text(module.signalName.data[signal]))
      }
      this.vectors.set(module, vectors)
    }
    return vectors
  }

  /** "" for the top, else the path of instances with a "/" after each. */
  scopeText(scope: number): string {
    let text = ''
    for (let at = scope; at > 0; at = this.scopeParent.data[at]) {
      text = `${this.names.text(this.scopeName.data[at])}/${text}`
    }
    return text
  }

  /** The instance of a cell, with its path. */
  cellText(row: number): string {
    return this.scopeText(this.cellScope.data[row]) + this.names.text(this.cellName.data[row])
  }

  /** True where the net's name is nobody's declaration but only a use. */
  isImplicit(net: number): boolean {
    const module = this.scopeModules[this.netScope.data[net]]
    const name = this.netName.data[net]
    for (let signal = 0; signal < module.nSignals; signal++) {
      if (module.signalName.data[signal] === name) {
        return (module.signalFlags.data[signal] & SignalFlag.Implicit) !== 0
      }
    }
    return false
  }
}
