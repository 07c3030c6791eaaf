export const SCREENS = [
  'start',
  'product',
  'budget',
  'faults-lost',
  'money',
  'assumptions',
  'import',
  'testers',
  'tasks',
  'settings',
] as const

export type ScreenName = (typeof SCREENS)[number]

export const SCREEN_LABELS: Readonly<Record<ScreenName, string>> = {
  start: 'Projects',
  product: 'Overview',
  budget: 'Budget',
  'faults-lost': 'Faults lost',
  money: 'Money',
  assumptions: 'Assumptions',
  import: 'Import',
  testers: 'Testers',
  tasks: 'Tasks',
  settings: 'Settings',
}

/** Where one is. Params hold what makes a place worth a link: run, budget, cut. */
export type Place = {
  readonly screen: ScreenName
  readonly productId: number | null
  readonly params: Readonly<Record<string, string>>
}

export const START: Place = { screen: 'start', productId: null, params: {} }

/** Returns a place as the address after the hash sign: `#/products/3/budget?run=14`. */
export function hashOf({ screen, productId, params }: Place): string {
  const product = productId === null ? '' : `/products/${productId}`
  const query = new URLSearchParams(params).toString()
  const path = screen === 'start' ? '/' : `${product}/${screen}`
  return `#${path}${query === '' ? '' : `?${query}`}`
}

/** Returns the place that an address names; the start screen for any that it does not understand. */
export function placeOf(hash: string): Place {
  const match = /^#(?:\/products\/([1-9]\d{0,14}))?\/([a-z-]*)(?:\?(.*))?$/.exec(hash)
  if (!match) return START
  const screen = SCREENS.find((name) => name === match[2])
  if (screen === undefined) return START
  return {
    screen,
    productId: match[1] === undefined ? null : Number(match[1]),
    params: Object.fromEntries(new URLSearchParams(match[3] ?? '')),
  }
}
