#!/usr/bin/env node
// Builds what is stale, then runs what was asked for: `start`, `build`, or a command of the command line.
import { spawn, spawnSync } from 'node:child_process'
import { existsSync } from 'node:fs'
import module from 'node:module'
import { constants } from 'node:os'
import { dirname, join } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'

const OLDEST_NODE = 24
const root = join(dirname(fileURLToPath(import.meta.url)), '..')
const own = join(root, 'node_modules/node/bin', process.platform === 'win32' ? 'node.exe' : 'node')

if (Number.parseInt(process.versions.node, 10) < OLDEST_NODE) {
  if (!existsSync(own)) {
    console.error(
      `Tallycut runs on Node ${OLDEST_NODE}; this is ${process.versions.node}. Run "npm ci" in ${root} first.`,
    )
    process.exit(2)
  }
  await runOwnNode()
}

const { buildStale } = await import('./launch/build.mjs')
const [command, ...rest] = process.argv.slice(2)
if (command === 'build') {
  await buildStale(['kernel', 'node', 'renderer', 'electron'])
} else if (command === 'start') {
  await buildStale(['kernel', 'node', 'renderer'])
  const { findElectron } = await import('./launch/electron-binary.mjs')
  const found = await findElectron()
  if (found.path) {
    await buildStale(['electron'])
    const { status } = spawnSync(found.path, [root, ...rest], { stdio: 'inherit' })
    process.exit(status ?? 130)
  }
  console.error(
    `The desktop window can't open here: ${found.reason}. The same application follows in a browser.`,
  )
  await runCommandLine(['serve', '--open', ...rest])
} else {
  await buildStale(command === 'serve' ? ['kernel', 'node', 'renderer'] : ['kernel', 'node'])
  await runCommandLine(process.argv.slice(2))
}

/** Hands over to the Node that comes with the packages, passes signals on to it and ends as it ends. */
function runOwnNode() {
  const child = spawn(own, process.argv.slice(1), { stdio: 'inherit' })
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) process.on(signal, () => child.kill(signal))
  return new Promise(() => {
    child.on('exit', (code, signal) => process.exit(code ?? 128 + constants.signals[signal]))
  })
}

async function runCommandLine(args) {
  module.enableCompileCache(join(root, 'out/compile-cache'))
  process.argv.splice(2, process.argv.length, ...args)
  await import(pathToFileURL(join(root, 'out/node/cli.js')).href)
}
