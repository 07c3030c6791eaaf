import { BrowserWindow, dialog, ipcMain, type IpcMainInvokeEvent } from 'electron'
import type { Application } from '../compose.ts'
import { AppError, type Result } from '../contract/errors.ts'
import { channelOf, CHOOSE_PROJECT, OPERATION_NAMES } from '../contract/names.ts'
import { isPageUrl } from './page-protocol.ts'

/** Joins windows to the application: a handler for each operation, events to every window. */
export function bridgeWindows(application: Application): void {
  for (const name of OPERATION_NAMES) {
    ipcMain.handle(channelOf(name), (event, input: unknown): Promise<Result<unknown>> => {
      if (!isOwnPage(event)) return Promise.resolve({ ok: false, error: refusal() })
      return application.dispatch(name, input)
    })
  }
  ipcMain.handle(CHOOSE_PROJECT, async (event): Promise<string | null> => {
    const window = BrowserWindow.fromWebContents(event.sender)
    if (!isOwnPage(event) || window === null) return null
    const { filePaths } = await dialog.showOpenDialog(window, {
      title: 'Open a project',
      properties: ['openFile'],
      filters: [{ name: 'Tallycut project', extensions: ['tallycut'] }],
    })
    return filePaths[0] ?? null
  })
  application.events.subscribe(({ name, payload }) => {
    for (const window of BrowserWindow.getAllWindows()) {
      if (!window.isDestroyed()) window.webContents.send(channelOf(name), payload)
    }
  })
}

/** True for the main frame of one of our windows while it shows our own page. */
function isOwnPage({ sender, senderFrame }: IpcMainInvokeEvent): boolean {
  return (
    BrowserWindow.fromWebContents(sender) !== null &&
    senderFrame !== null &&
    senderFrame === sender.mainFrame &&
    isPageUrl(senderFrame.url)
  )
}

function refusal(): { code: 'not-allowed'; message: string } {
  const { message } = new AppError('not-allowed')
  return { code: 'not-allowed', message }
}
