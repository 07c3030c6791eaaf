import { resolve } from 'node:path'
import { app, BrowserWindow, dialog, Menu } from 'electron'
import { createApplication, type Application } from '../compose.ts'
import { findInstallation, projectFolder } from '../installation.ts'
import { bridgeWindows } from './bridge.ts'
import { registerPageScheme, servePage } from './page-protocol.ts'
import { openWindow } from './window.ts'

app.enableSandbox()
registerPageScheme()
if (app.requestSingleInstanceLock()) start()
else app.quit()

function start(): void {
  const application = createApplication({
    installation: findInstallation(import.meta.url),
    door: 'window',
    userFolder: app.getPath('userData'),
    projectFolder: projectFolder(),
    onFault: (where, error) => process.stderr.write(`fault in ${where}: ${faultText(error)}\n`),
  })
  Menu.setApplicationMenu(null)
  app.on('second-instance', (_event, argv) => {
    const [window] = BrowserWindow.getAllWindows()
    if (window?.isMinimized()) window.restore()
    window?.focus()
    void openGiven(application, argv)
  })
  app.on('activate', () => {
    if (BrowserWindow.getAllWindows().length === 0) openWindow()
  })
  app.on('window-all-closed', () => app.quit())
  closeBeforeQuit(application)
  app
    .whenReady()
    .then(() => {
      servePage(application)
      bridgeWindows(application)
      openWindow()
      return openGiven(application, process.argv)
    })
    .catch((error: unknown) => {
      dialog.showErrorBox('Tallycut could not start', faultText(error))
      app.exit(70)
    })
}

/** Opens the project file that the program was started with, if it was. */
async function openGiven(application: Application, argv: readonly string[]): Promise<void> {
  const path = argv.slice(1).find((argument) => argument.endsWith('.tallycut'))
  if (path === undefined) return
  const result = await application.dispatch('projects.open', { path: resolve(path) })
  if (!result.ok) dialog.showErrorBox('The project could not be opened', result.error.message)
}

/** Holds the first request to quit until everything is kept. */
function closeBeforeQuit(application: Application): void {
  let isClosed = false
  app.on('before-quit', (event) => {
    if (isClosed) return
    event.preventDefault()
    void application.close().finally(() => {
      isClosed = true
      app.quit()
    })
  })
}

function faultText(error: unknown): string {
  return error instanceof Error ? (error.stack ?? error.message) : String(error)
}
