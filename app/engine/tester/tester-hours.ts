const MS_PER_HOUR = 3_600_000

/**
 * Returns how many devices are tested so that `shipped` pass: each first test passes with `passFraction`, and
 * `retestRate` retests run for each first test.
 * SOURCE: common practice.
 */
export function testedDevices(shipped: number, passFraction: number, retestRate: number): number {
  return (shipped / passFraction) * (1 + retestRate)
}

/** Returns the hours of use that testing that many devices takes. SOURCE: common practice. */
export function hoursOfUse(tested: number, perDeviceMs: number): number {
  return (tested * perDeviceMs) / MS_PER_HOUR
}

/**
 * Returns the hours of tester that must stand ready for hours of use, as no tester tests all the time.
 * SOURCE: common practice.
 */
export function capacityHours(hours: number, utilisation: number): number {
  return hours / utilisation
}

/** Returns what a device's time on the tester costs; the rate is per hour of use. SOURCE: common practice. */
export function costOfTime(perDeviceMs: number, costPerHour: number): number {
  return (perDeviceMs / MS_PER_HOUR) * costPerHour
}
