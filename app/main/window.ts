import { join } from 'node:path'
import { BrowserWindow } from 'electron'
import { PAGE_URL } from './page-protocol.ts'

/** Opens the window on its own page, from which nothing leads elsewhere. */
export function openWindow(): BrowserWindow {
  const window = new BrowserWindow({
    width: 1440,
    height: 900,
    minWidth: 900,
    minHeight: 600,
    show: false,
    title: 'Tallycut',
    webPreferences: {
      preload: join(import.meta.dirname, '../preload/index.cjs'),
      contextIsolation: true,
      nodeIntegration: false,
      sandbox: true,
    },
  })
  const { webContents } = window
  webContents.on('will-navigate', (event) => event.preventDefault())
  webContents.on('will-redirect', (event) => event.preventDefault())
  webContents.on('will-attach-webview', (event) => event.preventDefault())
  webContents.setWindowOpenHandler(() => ({ action: 'deny' }))
  window.once('ready-to-show', () => window.show())
  void window.loadURL(PAGE_URL)
  return window
}
