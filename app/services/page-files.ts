import { readFile } from 'node:fs/promises'
import { extname, join, resolve, sep } from 'node:path'
import { CONTENT_POLICY } from '../contract/content-policy.ts'

export type PageFile = {
  readonly bytes: Uint8Array<ArrayBuffer>
  readonly headers: Readonly<Record<string, string>>
}

const MEDIA_TYPES: Readonly<Record<string, string>> = {
  '.html': 'text/html; charset=utf-8',
  '.js': 'text/javascript; charset=utf-8',
  '.css': 'text/css; charset=utf-8',
  '.json': 'application/json; charset=utf-8',
  '.svg': 'image/svg+xml',
  '.png': 'image/png',
  '.ico': 'image/x-icon',
  '.woff2': 'font/woff2',
}

/** Returns a file of the window's page by its path in a URL; null where the folder has none of that name. */
export async function pageFile(folder: string, urlPath: string): Promise<PageFile | null> {
  let path: string
  try {
    path = decodeURIComponent(urlPath)
  } catch {
    return null
  }
  const mediaType = MEDIA_TYPES[path === '/' ? '.html' : extname(path)]
  const full = resolve(join(folder, path === '/' ? 'index.html' : path))
  if (mediaType === undefined || path.includes('\0') || !full.startsWith(resolve(folder) + sep)) return null
  try {
    return {
      bytes: new Uint8Array(await readFile(full)),
      headers: {
        'content-type': mediaType,
        'content-security-policy': CONTENT_POLICY,
        'x-content-type-options': 'nosniff',
        'referrer-policy': 'no-referrer',
        'cache-control': 'no-cache',
      },
    }
  } catch {
    return null
  }
}
