import { useDialogs } from '../stores/dialogs.ts'
import { useNavigation } from '../stores/navigation.ts'
import { useNotices } from '../stores/notices.ts'
import { useProject } from '../stores/project.ts'
import { useSettings } from '../stores/settings.ts'
import { useUndo } from '../stores/undo.ts'
import { useCutSubject } from '../stores/cut-subject.ts'
import { focusRegion } from './focus-region.ts'
import { screenAction } from './screen-actions.ts'

export type CommandGroup = 'Go to' | 'Project' | 'Product' | 'Cut' | 'Pattern at the cut' | 'Chart' | 'Window'

/** An action of the window. Menu, buttons, command field and shortcut list all read it from here. */
export type Command = {
  readonly id: CommandId
  /** A verb and its object, or the screen's name. */
  readonly label: string
  readonly group: CommandGroup
  /** As in `Mod+K`; null where it has none. See keys.ts for what changes in a browser. */
  readonly keys: string | null
  /** Where keys act: anywhere, or only while a chart or the table of patterns has the focus. */
  readonly scope: 'anywhere' | 'chart' | 'patterns'
  /** Why it can't be done now, in words; null where it can. */
  readonly blockedBy: () => string | null
  readonly run: () => void
}

type Row = readonly [label: string, group: CommandGroup, keys: string | null, scope?: Command['scope']]

const TABLE = {
  find: ['Find or do anything', 'Go to', 'Mod+K'],
  'go.start': ['Projects', 'Go to', null],
  'go.product': ['Overview', 'Go to', 'Mod+1'],
  'go.budget': ['Budget', 'Go to', 'Mod+2'],
  'go.faults-lost': ['Faults lost', 'Go to', 'Mod+3'],
  'go.money': ['Money', 'Go to', null],
  'go.assumptions': ['Assumptions', 'Go to', null],
  'go.testers': ['Testers', 'Go to', null],
  'go.tasks': ['Tasks', 'Go to', null],
  'go.settings': ['Settings', 'Go to', 'Mod+,'],
  'go.next-product': ['Next product', 'Go to', 'Alt+ArrowDown'],
  'go.previous-product': ['Previous product', 'Go to', 'Alt+ArrowUp'],
  'project.new': ['New project…', 'Project', null],
  'project.open': ['Open project…', 'Project', 'Mod+O'],
  'project.demo': ['Open the demo', 'Project', null],
  'project.close': ['Close project', 'Project', null],
  'product.new': ['New product…', 'Project', null],
  'product.import': ['Import files…', 'Product', 'Mod+I'],
  'product.run': ['New run…', 'Product', 'Mod+R'],
  'product.report': ['Export report…', 'Product', 'Mod+E'],
  'product.delete': ['Delete product', 'Product', null],
  'cut.focus': ['Move the cut by keys', 'Cut', 'C'],
  'cut.keep': ['Keep as budget', 'Cut', 'Mod+B'],
  'cut.knee': ['Put the cut at the knee', 'Cut', null],
  'cut.least-cost': ['Put the cut at the least cost', 'Cut', null],
  'cut.prove-ceiling': ['Prove the ceiling', 'Cut', null],
  'cut.improve': ['Improve at this cut…', 'Cut', null],
  'cut.constraints': ['Set constraints…', 'Cut', null],
  'cut.weights': ['Set weights…', 'Cut', null],
  'pattern.keep': ['Keep the pattern', 'Pattern at the cut', 'K', 'patterns'],
  'pattern.leave-out': ['Leave the pattern out', 'Pattern at the cut', 'X', 'patterns'],
  'pattern.first': ['Fix the pattern at the front', 'Pattern at the cut', 'F', 'patterns'],
  'pattern.free': ['Free the pattern of its rules', 'Pattern at the cut', 'U', 'patterns'],
  'chart.patterns': ['Axis: patterns', 'Chart', '1', 'chart'],
  'chart.cycles': ['Axis: tester cycles', 'Chart', '2', 'chart'],
  'chart.milliseconds': ['Axis: time per device', 'Chart', '3', 'chart'],
  'chart.cost': ['Axis: cost per device', 'Chart', '4', 'chart'],
  'chart.steepest': ['Show or hide steepest first', 'Chart', 'S', 'chart'],
  'chart.as-delivered': ['Show or hide as delivered', 'Chart', 'D', 'chart'],
  'chart.ceiling': ['Show or hide the ceiling', 'Chart', 'L', 'chart'],
  'chart.zoom-in': ['Zoom in', 'Chart', '+', 'chart'],
  'chart.zoom-out': ['Zoom out', 'Chart', '-', 'chart'],
  'chart.zoom-usual': ['Zoom to where choices differ', 'Chart', '0', 'chart'],
  'chart.zoom-all': ['Zoom to all', 'Chart', 'A', 'chart'],
  'chart.table': ["The chart's table and back", 'Chart', 'T'],
  'chart.svg': ['Save the chart as SVG', 'Chart', null],
  'chart.png': ['Save the chart as PNG', 'Chart', null],
  'chart.csv': ["Save the chart's data as CSV", 'Chart', null],
  'chart.copy': ["Copy the chart's data", 'Chart', null],
  undo: ['Undo', 'Window', 'Mod+Z'],
  redo: ['Redo', 'Window', 'Mod+Shift+Z'],
  'window.theme': ['Switch between light and dark', 'Window', null],
  'window.next-region': ['Next region', 'Window', 'F6'],
  'window.previous-region': ['Previous region', 'Window', 'Shift+F6'],
  'window.shortcuts': ['Show this list of keys', 'Window', '?'],
} as const satisfies Record<string, Row>

export type CommandId = keyof typeof TABLE

type Action = { readonly run: () => void; readonly blockedBy?: () => string | null }

/** Keys of the cut itself, which acts on them while it has the focus; for the list of keys. */
export const CUT_KEYS: readonly (readonly [keys: string, does: string])[] = [
  ['ArrowLeft ArrowRight', 'One pattern less, more'],
  ['Shift+ArrowLeft Shift+ArrowRight', 'Ten patterns less, more'],
  ['PageUp PageDown', 'Fifty patterns less, more'],
  ['Home', 'The fewest patterns that meet the goal'],
  ['End', 'The most patterns that fit all limits'],
  ['[ ]', 'Previous, next budget or marker'],
  ['Enter', 'Keep it as a budget'],
  ['Escape', 'Back to where a drag began'],
]

/** Returns every command, bound to the stores. What the shown screen does itself goes before what is said here. */
export function useCommands(): readonly Command[] {
  const own = useOwnActions()
  return (Object.keys(TABLE) as CommandId[]).map((id) => {
    const [label, group, keys, scope = 'anywhere']: Row = TABLE[id]
    const action = (): Action | undefined => screenAction(id) ?? own[id]
    return {
      id,
      label,
      group,
      keys,
      scope,
      blockedBy: () => {
        const found = action()
        return found ? (found.blockedBy?.() ?? null) : 'Not on this screen'
      },
      run: () => action()?.run(),
    }
  })
}

function useOwnActions(): Partial<Record<CommandId, Action>> {
  const navigation = useNavigation()
  const project = useProject()
  const dialogs = useDialogs()
  const settings = useSettings()
  const notices = useNotices()
  const undo = useUndo()
  const subjects = useCutSubject()

  const productId = (): number | null => navigation.place.productId ?? project.products[0]?.id ?? null
  const needsProject = (): string | null => (project.project ? null : 'No project is open')
  const needsProduct = (): string | null =>
    needsProject() ?? (productId() === null ? 'The project has no product yet' : null)
  const needsWriting = (): string | null =>
    needsProject() ?? (project.isReadOnly ? 'The project is open for reading only' : null)
  const toProduct = (screen: 'product' | 'budget' | 'faults-lost' | 'money' | 'assumptions'): Action => ({
    blockedBy: needsProduct,
    run: () => navigation.go(screen, productId()),
  })
  const toNeighbour = (step: 1 | -1): Action => ({
    blockedBy: needsProduct,
    run: () => {
      const { products } = project
      const at = products.findIndex(({ id }) => id === productId())
      const next = products[(at + step + products.length) % products.length]
      if (next) navigation.go('product', next.id)
    },
  })

  async function exportReport(): Promise<void> {
    const id = productId()
    if (id === null) return
    const subject = await notices.attempt('No report could be made', () => subjects.get(id))
    if (subject === null) notices.tell('caution', 'Nothing to report yet', 'A report needs a finished run.')
    else if (subject) dialogs.show({ kind: 'export', productId: id, subject })
  }

  return {
    find: { run: () => dialogs.show({ kind: 'commands' }) },
    'go.start': { run: () => navigation.go('start') },
    'go.product': toProduct('product'),
    'go.budget': toProduct('budget'),
    'go.faults-lost': toProduct('faults-lost'),
    'go.money': toProduct('money'),
    'go.assumptions': toProduct('assumptions'),
    'go.testers': { blockedBy: needsProject, run: () => navigation.go('testers') },
    'go.tasks': { run: () => navigation.go('tasks') },
    'go.settings': { run: () => navigation.go('settings') },
    'go.next-product': toNeighbour(1),
    'go.previous-product': toNeighbour(-1),
    'project.new': { run: () => dialogs.show({ kind: 'new-project' }) },
    'project.open': { run: () => dialogs.show({ kind: 'open-project' }) },
    'project.demo': {
      run: () =>
        void notices.attempt('The demo could not be opened', async () => {
          await project.openDemo()
          const first = project.products[0]
          if (first) navigation.go('product', first.id)
        }),
    },
    'project.close': {
      blockedBy: needsProject,
      run: () =>
        void notices.attempt('The project stays open', async () => {
          await project.close()
          navigation.go('start')
        }),
    },
    'product.new': { blockedBy: needsWriting, run: () => dialogs.show({ kind: 'new-product' }) },
    'product.import': {
      blockedBy: () => needsWriting() ?? needsProduct(),
      run: () => navigation.go('import', productId()),
    },
    'product.run': {
      blockedBy: () => needsWriting() ?? needsProduct(),
      run: () => {
        const id = productId()
        if (id !== null) dialogs.show({ kind: 'new-run', productId: id })
      },
    },
    'product.report': { blockedBy: needsProduct, run: () => void exportReport() },
    undo: {
      blockedBy: () => (undo.undoLabel === null ? 'Nothing to undo' : null),
      run: () => void undo.undo(),
    },
    redo: {
      blockedBy: () => (undo.redoLabel === null ? 'Nothing to do again' : null),
      run: () => void undo.redo(),
    },
    'window.theme': {
      run: () =>
        void notices.attempt('The setting was not kept', () =>
          settings.change({ theme: settings.scheme === 'dark' ? 'light' : 'dark' }),
        ),
    },
    'window.next-region': { run: () => focusRegion(1) },
    'window.previous-region': { run: () => focusRegion(-1) },
    'window.shortcuts': { run: () => dialogs.show({ kind: 'shortcuts' }) },
  }
}
