import { spawn } from 'node:child_process'
import { parseArgs } from 'node:util'
import { createApplication } from '../compose.ts'
import { findInstallation, projectFolder, userFolder } from '../installation.ts'
import { startWebHost } from '../web/serve.ts'
import type { Io } from './io.ts'

export async function serve(args: readonly string[], io: Io): Promise<number> {
  const { values } = parseArgs({
    args: [...args],
    options: { port: { type: 'string' }, open: { type: 'boolean' } },
  })
  const application = createApplication({
    installation: findInstallation(io.entryUrl),
    door: 'browser',
    userFolder: io.env['TALLYCUT_USER_FOLDER'] ?? userFolder(),
    projectFolder: io.env['TALLYCUT_PROJECT_FOLDER'] ?? projectFolder(),
    onFault: (where, error) =>
      io.stderr.write(`fault in ${where}: ${error instanceof Error ? error.stack : error}\n`),
  })
  const host = await startWebHost(application, Number(values.port ?? 0))
  io.stdout.write(`Tallycut is at ${host.url}\n`)
  if (values.open === true) openInBrowser(host.url, io.env)
  await new Promise<void>((done) => {
    process.once('SIGINT', done)
    process.once('SIGTERM', done)
  })
  await host.close()
  await application.close()
  return 0
}

/** Opens the address where there is a desktop; elsewhere the printed address is all there is. */
function openInBrowser(url: string, env: Io['env']): void {
  const hasDesktop = process.platform !== 'linux' || Boolean(env['DISPLAY'] ?? env['WAYLAND_DISPLAY'])
  if (!hasDesktop) return
  const [program, ...args] =
    process.platform === 'darwin'
      ? ['open']
      : process.platform === 'win32'
        ? ['cmd', '/c', 'start', '']
        : ['xdg-open']
  const opener = spawn(program ?? 'xdg-open', [...args, url], { stdio: 'ignore', detached: true })
  opener.once('error', () => undefined)
  opener.unref()
}
