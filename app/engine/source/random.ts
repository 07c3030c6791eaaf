/** A seeded source of random numbers: the same seed gives the same numbers on every machine. */
export type Random = {
  /** Returns 32 random bits as an unsigned number. */
  bits(): number
  /** Returns a whole number from 0 to n − 1, each equally likely; n from 1 to 2^32. */
  below(n: number): number
  /** Returns a number from 0 up to, but not, 1. */
  fraction(): number
}

/**
 * Returns a source of random numbers for a seed, a whole number. The generator's state is filled by a 32-bit mixer (a
 * Weyl sequence, then multiply and xor-shift), our choice.
 */
export function createRandom(seed: number): Random {
  let weyl = seed >>> 0
  const mixed = (): number => {
    weyl = (weyl + 0x9e3779b9) >>> 0
    let z = weyl
    z = Math.imul(z ^ (z >>> 16), 0x85ebca6b)
    z = Math.imul(z ^ (z >>> 13), 0xc2b2ae35)
    return (z ^ (z >>> 16)) >>> 0
  }
  return randomFromState(mixed(), mixed(), mixed(), mixed() | 1) // never all zero
}

/**
 * Returns the generator at a state of four words, not all zero.
 * SOURCE: xoshiro128** of Blackman & Vigna 2018, "Scrambled linear pseudorandom number generators".
 */
export function randomFromState(a: number, b: number, c: number, d: number): Random {
  const bits = (): number => {
    const product = Math.imul(b, 5)
    const result = Math.imul((product << 7) | (product >>> 25), 9) >>> 0
    const shifted = b << 9
    c ^= a
    d ^= b
    b ^= c
    a ^= d
    c ^= shifted
    d = (d << 11) | (d >>> 21)
    return result
  }
  return {
    bits,
    below(n) {
      // Values past the last whole multiple of n would favour small results: draw again.
      const limit = 2 ** 32 - (2 ** 32 % n)
      for (;;) {
        const drawn = bits()
        if (drawn < limit) return drawn % n
      }
    },
    fraction: () => bits() / 2 ** 32,
  }
}
