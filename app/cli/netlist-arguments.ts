import type { TestPin } from '../engine/circuit/netlist.ts'
import { NETLIST_FORMATS } from '../engine/formats/registry.ts'
import type { NetlistFiles } from '../services/on-files/read-netlist-files.ts'
import { UsageError, type Arguments } from './arguments.ts'
import type { OptionTable } from './command.ts'

/** The options of every command that reads a netlist. */
export const NETLIST_OPTIONS = {
  library: {
    value: 'LIB…',
    isList: true,
    help: 'Liberty cell library, one or more; files that end in .lib or .lib.gz are taken as such anywhere',
  },
  top: { value: 'NAME', help: 'top module, where the netlist has several that could be it' },
  'test-pin': {
    value: 'NAME=0|1|X',
    isList: true,
    help: 'value that an input holds while patterns capture; may be repeated. What is not said is proposed from STIL patterns and the library',
  },
  'assume-scanned': {
    help: 'take every flip-flop of a mapped netlist as scanned: a planning assumption, and warned about',
  },
} as const satisfies OptionTable

export const NETLIST_DETAILS =
  'NETLIST is a .bench file or structural Verilog; further files that end in .v, .vg or .sv belong to it.'

/**
 * Returns the netlist that operands and options describe, and the operands that are something else. The first operand is
 * the netlist, whatever its name.
 */
export function netlistArguments(args: Arguments): { netlist: NetlistFiles; others: string[] } {
  const operands = args.operands.filter((path) => !isLibrary(path))
  const [first, ...rest] = operands
  if (first === undefined) throw new UsageError('A netlist is needed.')
  return {
    netlist: {
      netlist: [first, ...rest.filter(isNetlist)],
      libraries: [...args.list('library'), ...args.operands.filter(isLibrary)],
      top: args.text('top'),
      testPins: args.list('test-pin').map(testPinOf),
      assumeScanned: args.has('assume-scanned'),
    },
    others: rest.filter((path) => !isNetlist(path)),
  }
}

function isLibrary(path: string): boolean {
  return /\.lib(\.gz)?$/i.test(path)
}

function isNetlist(path: string): boolean {
  const extension = path.replace(/\.gz$/i, '').split('.').pop()?.toLowerCase() ?? ''
  return NETLIST_FORMATS.some(({ extensions }) => extensions.includes(extension))
}

function testPinOf(text: string): TestPin {
  const [, name, value] = /^(.+)=([01Xx])$/.exec(text) ?? []
  if (name === undefined || value === undefined) {
    throw new UsageError(`--test-pin takes NAME=0, NAME=1 or NAME=X; "${text}" was given.`)
  }
  return { name, role: 'fixed', value: value === '0' ? 0 : value === '1' ? 1 : 'X', from: 'user' }
}
