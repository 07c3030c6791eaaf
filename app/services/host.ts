import type { Handlers } from '../contract/handlers.ts'
import type { OutputOf } from '../contract/operations.ts'

export type HostInfo = OutputOf<'app.info'>

export function createHost(info: HostInfo): Pick<Handlers, 'app.info'> {
  return { 'app.info': () => info }
}
