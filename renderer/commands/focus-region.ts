const FOCUSABLE =
  'a[href], button:not(:disabled), input:not(:disabled), select:not(:disabled), textarea:not(:disabled), [tabindex="0"]'

/** Moves the focus to the first control of the next (or previous) region of the window, in the order of the page. */
export function focusRegion(step: 1 | -1): void {
  const regions = [...document.querySelectorAll<HTMLElement>('[data-region]')].filter(
    (region) => region.offsetParent !== null || region.getClientRects().length > 0,
  )
  if (regions.length === 0) return
  const at = regions.findIndex((region) => region.contains(document.activeElement))
  const next = regions[(at + step + regions.length) % regions.length]
  const target = next?.querySelector<HTMLElement>(FOCUSABLE) ?? next
  target?.focus()
}
