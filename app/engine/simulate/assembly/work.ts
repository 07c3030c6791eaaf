/** Work done so far, in evaluated gates and visited regions, so that callers can stop between parts of like size. */
export let workDone: u32 = 0

// @ts-ignore: decorator
@inline
export function spend(amount: u32): void {
  workDone += amount
}
