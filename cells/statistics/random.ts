// Random numbers that are the same on every machine: seeded, and made of 32-bit integers alone. For quantile residuals and simulations; never
// for secrets.

/** Draws, one after the other. */
export interface Random {
  /** A number strictly between 0 and 1, with 53 random bits. */
  next(): number
  /** 32 random bits. */
  bits(): number
}

/**
 * The generator xoshiro128** of Blackman & Vigna (2021), Scrambled linear pseudorandom number generators, ACM Transactions on
 * Mathematical Software 47:36; its state is drawn from the seed by the finaliser of MurmurHash3 over a Weyl sequence, so that near seeds
 * have nothing in common.
 */
export function random(seed: number): Random {
  const low = seed >>> 0
  const high = Math.floor(seed / 4294967296) >>> 0
  let weyl = (low ^ mixed(high)) >>> 0
  const draw = (): number => {
    weyl = (weyl + 0x9e3779b9) >>> 0
    return mixed(weyl)
  }
  return randomFrom([draw(), draw(), draw(), draw()])
}

/** The same generator from a state of four 32-bit numbers, not all 0. */
export function randomFrom(state: readonly [number, number, number, number]): Random {
  let [a, b, c, d] = state
  const bits = (): number => {
    const result = Math.imul(rotated(Math.imul(b, 5), 7), 9) >>> 0
    const t = b << 9
    c ^= a
    d ^= b
    b ^= c
    a ^= d
    c ^= t
    d = rotated(d, 11)
    return result
  }
  return {
    bits,
    next: () => {
      const high = bits() >>> 5
      const low = bits() >>> 6
      return (high * 67108864 + low + 0.5) / 9007199254740992
    },
  }
}

const rotated = (x: number, by: number): number => (x << by) | (x >>> (32 - by))

/** The finaliser of MurmurHash3 (Appleby 2008, public domain). */
function mixed(x: number): number {
  let h = x
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b)
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35)
  return (h ^ (h >>> 16)) >>> 0
}
