import { defineStore } from 'pinia'
import { computed, ref, shallowRef } from 'vue'
import { AppError } from '../../app/contract/errors.ts'
import type { NetlistInspection, NetlistRevision, TestPinView } from '../../app/contract/shapes/netlist.ts'
import type { PatternInspection } from '../../app/contract/shapes/pattern-set.ts'
import { api } from '../api/client.ts'

export type FileRole = 'netlist' | 'library' | 'patterns'

export type ImportFile = {
  readonly fileId: string
  readonly name: string
  readonly sizeBytes: number
  readonly role: FileRole
}

type Inspection<T> =
  | { readonly status: 'idle' }
  | { readonly status: 'reading' }
  | { readonly status: 'ready'; readonly inspection: T }
  | { readonly status: 'failed'; readonly message: string }

const LIBRARY = /\.lib$/
const PATTERNS = /\.(stil|vec|vectors|csv|tsv|txt|pat)$/

/** Files on their way into a product: what they are taken for, and what the readers understood of them. */
export const useImport = defineStore('import', () => {
  const files = shallowRef<readonly ImportFile[]>([])
  const netlist = shallowRef<Inspection<NetlistInspection>>({ status: 'idle' })
  const patterns = shallowRef<Inspection<PatternInspection>>({ status: 'idle' })
  const top = ref<string | null>(null)
  const testPins = shallowRef<readonly TestPinView[]>([])
  const assumeScanned = ref(false)
  const problem = ref('')
  let asked = 0

  const idsOf = (role: FileRole): string[] =>
    files.value.filter((file) => file.role === role).map(({ fileId }) => fileId)
  const hasNetlist = computed(() => files.value.some(({ role }) => role === 'netlist'))
  const hasPatterns = computed(() => files.value.some(({ role }) => role === 'patterns'))

  async function add(more: readonly File[]): Promise<void> {
    problem.value = ''
    const added: ImportFile[] = []
    for (const file of more) {
      try {
        const bytes = new Uint8Array(await file.arrayBuffer())
        const { fileId, name, sizeBytes } = await api.call('files.add', { name: file.name, bytes })
        added.push({ fileId, name, sizeBytes, role: roleOf(name) })
      } catch (error) {
        problem.value = `${file.name}: ${error instanceof AppError ? error.message : 'it could not be read; a folder can not be imported.'}`
      }
    }
    files.value = [...files.value, ...added]
  }

  async function drop(fileId: string): Promise<void> {
    files.value = files.value.filter((file) => file.fileId !== fileId)
    await api.call('files.drop', { fileIds: [fileId] })
  }

  function takeFor(fileId: string, role: FileRole): void {
    files.value = files.value.map((file) => (file.fileId === fileId ? { ...file, role } : file))
  }

  async function inspectNetlist(): Promise<void> {
    const mine = ++asked
    netlist.value = { status: 'reading' }
    try {
      const inspection = await api.call('netlists.inspect', {
        fileIds: idsOf('netlist'),
        libraryFileIds: idsOf('library'),
        top: top.value,
        testPins: [...testPins.value],
        assumeScanned: assumeScanned.value,
      })
      if (mine === asked) netlist.value = { status: 'ready', inspection }
    } catch (error) {
      if (mine === asked) netlist.value = { status: 'failed', message: messageOf(error) }
    }
  }

  async function inspectPatterns(netlistId: number): Promise<void> {
    const mine = ++asked
    patterns.value = { status: 'reading' }
    try {
      const inspection = await api.call('patternSets.inspect', { netlistId, fileIds: idsOf('patterns') })
      if (mine === asked) patterns.value = { status: 'ready', inspection }
    } catch (error) {
      if (mine === asked) patterns.value = { status: 'failed', message: messageOf(error) }
    }
  }

  async function saveNetlist(productId: number, name: string): Promise<NetlistRevision | null> {
    if (netlist.value.status !== 'ready') return null
    const { inspectionId } = netlist.value.inspection
    return api.call('netlists.save', { productId, inspectionId, name })
  }

  async function savePatterns(productId: number, name: string): Promise<void> {
    if (patterns.value.status !== 'ready') return
    const { inspectionId } = patterns.value.inspection
    await api.call('patternSets.save', { productId, inspectionId, name })
  }

  /** Forgets the files of a netlist, or of a pattern set, that was saved. */
  function forget(what: 'netlist' | 'patterns'): void {
    files.value = files.value.filter(({ role }) => (role === 'patterns') !== (what === 'patterns'))
    if (what === 'netlist') netlist.value = { status: 'idle' }
    else patterns.value = { status: 'idle' }
  }

  function start(): void {
    files.value = []
    netlist.value = { status: 'idle' }
    patterns.value = { status: 'idle' }
    top.value = null
    testPins.value = []
    assumeScanned.value = false
    problem.value = ''
  }

  return {
    files,
    netlist,
    patterns,
    top,
    testPins,
    assumeScanned,
    problem,
    hasNetlist,
    hasPatterns,
    add,
    drop,
    takeFor,
    inspectNetlist,
    inspectPatterns,
    saveNetlist,
    savePatterns,
    forget,
    start,
  }
})

/** What a file is taken for by its name; the user may say otherwise. */
function roleOf(name: string): FileRole {
  const plain = name.toLowerCase().replace(/\.gz$/, '')
  if (LIBRARY.test(plain)) return 'library'
  return PATTERNS.test(plain) ? 'patterns' : 'netlist'
}

function messageOf(error: unknown): string {
  if (error instanceof AppError) return error.message
  throw error
}
