// Electron's own binary is not part of its package: it is fetched once, where a host answers.
import { spawnSync } from 'node:child_process'
import { existsSync, readFileSync } from 'node:fs'
import { createRequire } from 'node:module'
import { dirname, join } from 'node:path'

const SILENCE_MS = 5000
const require = createRequire(import.meta.url)

/** Returns `{ path }` of the binary, or `{ reason }` why there is none. */
export async function findElectron() {
  if (process.platform === 'linux' && !process.env.DISPLAY && !process.env.WAYLAND_DISPLAY) {
    return { reason: 'this machine has no desktop (neither DISPLAY nor WAYLAND_DISPLAY is set)' }
  }
  const folder = dirname(require.resolve('electron/package.json'))
  if (!installedPath(folder)) {
    const failure = await fetchArchive(folder)
    if (failure) return { reason: failure }
    const { status } = spawnSync(process.execPath, [join(folder, 'install.js')], {
      stdio: ['ignore', 'ignore', 'inherit'],
    })
    if (status !== 0) return { reason: "Electron's binary was fetched but could not be unpacked" }
  }
  const path = installedPath(folder)
  return path ? { path } : { reason: "Electron's binary is not where its package says" }
}

function installedPath(folder) {
  const note = join(folder, 'path.txt')
  if (!existsSync(note)) return null
  const path = join(folder, 'dist', readFileSync(note, 'utf8'))
  return existsSync(path) ? path : null
}

/** Fetches the archive into Electron's cache with its progress on standard error; returns why not, or null. */
async function fetchArchive(folder) {
  const { downloadArtifact } = await import('@electron/get')
  const { version } = JSON.parse(readFileSync(join(folder, 'package.json'), 'utf8'))
  const silence = new AbortController()
  let timer = setTimeout(() => silence.abort(), SILENCE_MS)
  let shown = -1
  try {
    await downloadArtifact({
      version,
      artifactName: 'electron',
      platform: process.platform,
      arch: process.arch,
      checksums: JSON.parse(readFileSync(join(folder, 'checksums.json'), 'utf8')),
      downloadOptions: {
        quiet: true,
        signal: silence.signal,
        getProgressCallback: async ({ percent }) => {
          clearTimeout(timer)
          timer = setTimeout(() => silence.abort(), SILENCE_MS)
          const now = Math.floor(percent * 100)
          if (now !== shown) process.stderr.write(`\rFetching Electron ${version}: ${(shown = now)} %`)
        },
      },
    })
    return null
  } catch {
    return silence.signal.aborted
      ? `the host of Electron's binary did not answer within ${SILENCE_MS / 1000} s`
      : "Electron's binary is not here and could not be fetched"
  } finally {
    clearTimeout(timer)
    if (shown >= 0) process.stderr.write('\n')
  }
}
