import { readdirSync, readFileSync } from 'node:fs'
import { dirname, join, relative, resolve } from 'node:path'
import { describe, expect, it } from 'vitest'

const root = resolve(import.meta.dirname, '..')

type Rule = {
  /** Folders of ours whose code may be imported; a file name stands for itself. */
  readonly code: readonly string[]
  /** Folders of which types alone may be imported. */
  readonly types?: readonly string[]
  /** Packages; `node:` stands for everything that Node brings. */
  readonly packages: readonly string[]
}

/** Who may import whom. The longest folder that fits a file decides. */
const RULES: Readonly<Record<string, Rule>> = {
  'app/engine': { code: ['app/engine'], packages: [] },
  'app/contract': { code: ['app/contract'], types: ['app/engine'], packages: ['zod'] },
  'app/workers': {
    code: ['app/workers', 'app/engine', 'app/contract', 'app/report'],
    packages: ['node:', 'highs'],
  },
  'app/services': {
    code: [
      'app/services',
      'app/contract',
      'app/engine',
      'app/workers',
      'app/installation.ts',
      'app/report',
      'db/open-project.ts',
    ],
    types: ['db'],
    packages: ['node:', 'zod'],
  },
  'app/report': {
    code: ['app/report', 'app/contract', 'app/engine'],
    packages: ['node:', 'pdfmake', 'write-excel-file'],
  },
  db: { code: ['db', 'app/contract'], types: ['app/engine'], packages: ['node:', 'better-sqlite3'] },
  'app/installation.ts': { code: [], packages: ['node:'] },
  'app/compose.ts': { code: ['app', 'db'], packages: ['node:'] },
  'app/main': {
    code: ['app/main', 'app/contract', 'app/compose.ts', 'app/installation.ts'],
    packages: ['node:', 'electron'],
  },
  'app/preload': {
    code: ['app/preload', 'app/contract/names.ts'],
    types: ['app/contract'],
    packages: ['electron'],
  },
  'app/web': { code: ['app/web', 'app/contract', 'app/compose.ts'], packages: ['node:'] },
  'app/cli': {
    code: [
      'app/cli',
      'app/web',
      'app/contract',
      'app/compose.ts',
      'app/installation.ts',
      'app/engine',
      'app/services/on-files',
      'app/report',
      'app/workers',
      'db/open-project.ts',
    ],
    packages: ['node:'],
  },
  renderer: {
    code: ['renderer', 'app/contract'],
    types: ['app/engine'],
    packages: ['vue', 'pinia', 'naive-ui', 'echarts'],
  },
  assets: { code: ['assets', 'app/engine'], packages: ['node:'] },
}

type Import = { readonly target: string; readonly isType: boolean }

const IMPORT =
  /(?:^|\n)\s*(import|export)\s+(type\s+)?(?:[^'"`;]*?\sfrom\s+)?['"]([^'"]+)['"]|\bimport\(\s*['"]([^'"]+)['"]\s*\)/g

function importsOf(text: string): Import[] {
  return [...text.matchAll(IMPORT)].map((found) => {
    const named = /^\s*(?:import|export)\s*\{([^}]*)\}/.exec(found[0].trimStart())?.[1]
    const names = named
      ?.split(',')
      .map((name) => name.trim())
      .filter(Boolean)
    const isType =
      found[2] !== undefined ||
      (names !== undefined && names.length > 0 && names.every((name) => name.startsWith('type ')))
    return { target: found[3] ?? found[4] ?? '', isType }
  })
}

function filesIn(folder: string): string[] {
  return readdirSync(join(root, folder), { withFileTypes: true, recursive: true })
    .filter((entry) => entry.isFile() && /\.(ts|vue)$/.test(entry.name) && !/\.d\.m?ts$/.test(entry.name))
    .map((entry) => relative(root, join(entry.parentPath, entry.name)))
    .filter((path) => !path.includes('simulate/assembly/') && !path.startsWith('app/launch'))
}

const files = ['app', 'db', 'renderer', 'assets'].flatMap(filesIn)
const imports = new Map(files.map((file) => [file, importsOf(readFileSync(join(root, file), 'utf8'))]))

const isIn = (file: string, place: string): boolean => file === place || file.startsWith(`${place}/`)

function ruleOf(file: string): Rule | undefined {
  const place = Object.keys(RULES)
    .filter((each) => isIn(file, each))
    .sort((a, b) => b.length - a.length)[0]
  return place === undefined ? undefined : RULES[place]
}

function targetOf(file: string, { target }: Import): string | null {
  return target.startsWith('.') ? relative(root, resolve(root, dirname(file), target)) : null
}

// SOURCE: the import table of the contributor's guide.
describe('the house', () => {
  it('has a rule for every file', () => {
    expect(files.length).toBeGreaterThan(200)
    expect(files.filter((file) => ruleOf(file) === undefined)).toEqual([])
  })

  it('imports only what its table allows', () => {
    const broken: string[] = []
    for (const [file, list] of imports) {
      const rule = ruleOf(file)
      if (rule === undefined) continue
      for (const each of list) {
        const target = targetOf(file, each)
        const isAllowed =
          target === null
            ? rule.packages.some(
                (name) =>
                  each.target === name || each.target.startsWith(name.endsWith(':') ? name : `${name}/`),
              )
            : rule.code.some((place) => isIn(target, place)) ||
              (each.isType && (rule.types ?? []).some((place) => isIn(target, place)))
        if (!isAllowed) broken.push(`${file} → ${each.target}${each.isType ? ' (types)' : ''}`)
      }
    }
    expect(broken).toEqual([])
  })

  it('keeps the engine free of clocks, chance and the machine', () => {
    const forbidden =
      /(?<!\.)\b(Date\.|new Date|Math\.random|process\.|setTimeout|console\.|WebAssembly\b|Buffer\.)/
    const found = filesIn('app/engine').filter((file) =>
      forbidden.test(readFileSync(join(root, file), 'utf8').replace(/\/\*[\s\S]*?\*\/|\/\/.*/g, '')),
    )
    expect(found).toEqual([])
  })

  it('has no circle of imports at run time', () => {
    const state = new Map<string, 'open' | 'done'>()
    const circles: string[] = []
    const visit = (file: string, path: readonly string[]): void => {
      if (state.get(file) === 'done') return
      if (state.get(file) === 'open') {
        circles.push([...path.slice(path.indexOf(file)), file].join(' → '))
        return
      }
      state.set(file, 'open')
      for (const each of imports.get(file) ?? []) {
        const target = targetOf(file, each)
        if (target !== null && !each.isType && imports.has(target)) visit(target, [...path, file])
      }
      state.set(file, 'done')
    }
    for (const file of files) visit(file, [])
    expect(circles).toEqual([])
  })
})
