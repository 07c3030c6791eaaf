/** Returns how many bits of a 32-bit word are 1. SOURCE: parallel bit count, Warren, Hacker's Delight, section 5-1. */
export function countOnes(word: number): number {
  let sum = word - ((word >>> 1) & 0x55555555)
  sum = (sum & 0x33333333) + ((sum >>> 2) & 0x33333333)
  return Math.imul((sum + (sum >>> 4)) & 0x0f0f0f0f, 0x01010101) >>> 24
}
