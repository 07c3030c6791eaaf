import { protocol, session } from 'electron'
import type { Application } from '../compose.ts'

const SCHEME = 'app'
const HOST = 'tallycut'

/** The address of the page. */
export const PAGE_URL = `${SCHEME}://${HOST}/`

/** True for addresses of our own page and its parts. */
export function isPageUrl(text: string): boolean {
  const url = URL.parse(text)
  return url !== null && url.protocol === `${SCHEME}:` && url.host === HOST
}

/** Before the application is ready: the page's own scheme counts as a secure origin of its own, and bypasses nothing. */
export function registerPageScheme(): void {
  protocol.registerSchemesAsPrivileged([
    { scheme: SCHEME, privileges: { standard: true, secure: true, supportFetchAPI: true } },
  ])
}

/** Serves the page from its folder alone, lets nothing else be loaded, and grants no permission to anything. */
export function servePage(application: Application): void {
  const { defaultSession } = session
  defaultSession.protocol.handle(SCHEME, async (request) => {
    const isRead = request.method === 'GET' || request.method === 'HEAD'
    if (!isPageUrl(request.url)) return new Response(null, { status: 403 })
    if (!isRead) return new Response(null, { status: 405 })
    const file = await application.page(new URL(request.url).pathname)
    if (file === null) return new Response(null, { status: 404 })
    return new Response(request.method === 'HEAD' ? null : file.bytes, { headers: { ...file.headers } })
  })
  defaultSession.webRequest.onBeforeRequest((details, answer) => {
    const { protocol: scheme } = new URL(details.url)
    answer({ cancel: !['app:', 'devtools:', 'data:', 'blob:'].includes(scheme) })
  })
  defaultSession.setPermissionRequestHandler((_contents, _permission, answer) => answer(false))
  defaultSession.setPermissionCheckHandler(() => false)
}
