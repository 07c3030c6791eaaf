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
  await new Promise<void>((done) => {
    process.once('SIGINT', done)
    process.once('SIGTERM', done)
  })
  await host.close()
  await application.close()
  return 0
}
