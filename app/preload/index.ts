import { contextBridge, ipcRenderer, webUtils, type IpcRendererEvent } from 'electron'
import { channelOf, CHOOSE_PROJECT, EVENT_NAMES, OPERATION_NAMES } from '../contract/names.ts'

/** What the page gets: one function for each operation, events without their Electron part, and two things of a desktop. */
const operations = Object.fromEntries(
  OPERATION_NAMES.map((name) => [name, (input: unknown) => ipcRenderer.invoke(channelOf(name), input)]),
)

function on(name: (typeof EVENT_NAMES)[number], listener: (payload: unknown) => void): () => void {
  if (!EVENT_NAMES.includes(name)) throw new RangeError(`there is no event "${name}"`)
  const hear = (_event: IpcRendererEvent, payload: unknown): void => listener(payload)
  ipcRenderer.on(channelOf(name), hear)
  return () => {
    ipcRenderer.off(channelOf(name), hear)
  }
}

contextBridge.exposeInMainWorld(
  'api',
  Object.freeze({
    operations: Object.freeze(operations),
    on,
    chooseProject: () => ipcRenderer.invoke(CHOOSE_PROJECT),
    pathOf: (file: File) => webUtils.getPathForFile(file),
  }),
)
