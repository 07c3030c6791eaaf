/**
 * Returns the time of one touchdown on `sites` sites, from the time of the whole program on one site, set-up included.
 * `efficiency` is measured on the whole program: 1 where further sites cost no time, 0 where they run one by one.
 * SOURCE: common practice.
 */
export function touchdownMs(oneSiteMs: number, sites: number, efficiency: number): number {
  return oneSiteMs * (1 + (sites - 1) * (1 - efficiency))
}

/**
 * Returns a device's share of a touchdown; `betweenMs` is what passes on all sites together: index time, reloads.
 * SOURCE: common practice.
 */
export function perDeviceMs(oneSiteMs: number, sites: number, efficiency: number, betweenMs: number): number {
  return (touchdownMs(oneSiteMs, sites, efficiency) + betweenMs) / sites
}
