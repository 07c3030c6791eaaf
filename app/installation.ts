import { existsSync, readFileSync } from 'node:fs'
import { homedir } from 'node:os'
import { extname, join, resolve } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'

/** Where this installation's parts lie. */
export type Installation = {
  readonly root: string
  /** The built simulation kernel. */
  readonly kernel: string
  /** The folder of the window's page. */
  readonly page: string
  readonly assets: string
  /** The script of a kind of thread: `simulate-worker` and so on. */
  thread(name: string): URL
}

/** Finds the parts from the URL of the entry that runs: a source in app/…, or a bundle in out/…; both two levels down. */
export function findInstallation(entryUrl: string): Installation {
  const entry = fileURLToPath(entryUrl)
  const root = resolve(entry, '../../..')
  const isSource = extname(entry) === '.ts'
  return {
    root,
    kernel: join(root, 'out/kernel/kernel.wasm'),
    page: join(root, 'out/renderer'),
    assets: join(root, 'assets'),
    thread: (name) =>
      pathToFileURL(
        isSource ? join(root, 'app/workers', `${name}.ts`) : join(root, 'out/node', `${name}.js`),
      ),
  }
}

/** The version of the program, such as 0.1.0. */
export function versionOf({ root }: Installation): string {
  const { version } = JSON.parse(readFileSync(join(root, 'package.json'), 'utf8')) as { version: string }
  return version
}

/** The folder for what a user's programs keep of their own, by the custom of the system. */
export function userFolder(): string {
  const { env, platform } = process
  if (platform === 'win32' && env['APPDATA']) return join(env['APPDATA'], 'Tallycut')
  if (platform === 'darwin') return join(homedir(), 'Library/Application Support/Tallycut')
  return join(env['XDG_CONFIG_HOME'] ?? join(homedir(), '.config'), 'tallycut')
}

/** The folder in which new projects are put unless the user says otherwise. */
export function projectFolder(): string {
  const documents = join(homedir(), 'Documents')
  return existsSync(documents) ? join(documents, 'Tallycut') : join(homedir(), 'Tallycut')
}
