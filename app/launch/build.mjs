// The parts that are built, and when each is stale: any of its sources newer than its stamp.
import { mkdirSync, readdirSync, statSync, writeFileSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'

const root = join(dirname(fileURLToPath(import.meta.url)), '../..')

const PARTS = {
  kernel: {
    sources: ['app/engine/simulate/assembly', 'app/launch/build-kernel.mjs'],
    build: async () => (await import('./build-kernel.mjs')).buildKernel(),
  },
  node: {
    sources: ['app', 'db', 'assets', 'vite.node.config.ts', 'package.json'],
    build: () => viteBuild('vite.node.config.ts'),
  },
  renderer: {
    sources: ['renderer', 'app/contract', 'vite.renderer.config.ts', 'package.json'],
    build: () => viteBuild('vite.renderer.config.ts'),
  },
  electron: {
    sources: ['app', 'db', 'electron.config.ts', 'package.json'],
    build: async () => {
      const { build } = await import('electron-vite')
      await build({ root, configFile: join(root, 'electron.config.ts'), logLevel: 'warn' })
    },
  },
}

/**
 * Builds those of the named parts whose sources changed since they were last built, telling on standard error what it
 * does. Standard output stays free for what the command prints.
 */
export async function buildStale(names) {
  for (const name of names) {
    const part = PARTS[name]
    const stamp = join(root, 'out', `${name}.stamp`)
    const started = Date.now()
    if (newest(part.sources.map((source) => join(root, source))) <= modified(stamp)) continue
    process.stderr.write(`Building ${name} …`)
    await part.build()
    mkdirSync(dirname(stamp), { recursive: true })
    writeFileSync(stamp, `${started}\n`)
    process.stderr.write(` ${((Date.now() - started) / 1000).toFixed(1)} s\n`)
  }
}

async function viteBuild(configFile) {
  const { build } = await import('vite')
  await build({ configFile: join(root, configFile), logLevel: 'warn' })
}

function newest(paths) {
  let latest = 0
  for (const path of paths) {
    const stat = statSync(path, { throwIfNoEntry: false })
    if (!stat) continue
    latest = Math.max(latest, stat.mtimeMs)
    if (!stat.isDirectory()) continue
    latest = Math.max(latest, newest(readdirSync(path).map((name) => join(path, name))))
  }
  return latest
}

function modified(path) {
  return statSync(path, { throwIfNoEntry: false })?.mtimeMs ?? 0
}
