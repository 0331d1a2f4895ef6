/**
 * Seeded random numbers, the same on every machine: xoshiro128** of
 * D. Blackman & S. Vigna, ACM Trans. Math. Softw. 47 (2021) 36, its state filled
 * by SplitMix64 of G. Steele, D. Lea & C. Flood, OOPSLA 2014.
 */

export interface Random {
  /** 32 random bits as an unsigned integer. */
  readonly bits: () => number;
  /** Uniform on [0, 1), 53 bits. */
  readonly uniform: () => number;
  /** Standard normal deviate, by Marsaglia's polar method. */
  readonly normal: () => number;
}

/** @param seed any integer; its lowest 64 bits count */
export function seededRandom(seed: number | bigint): Random {
  const [s0, s1] = splitMix64(BigInt(seed), 2);
  return xoshiro128(Number(s0 & MASK32), Number(s0 >> 32n), Number(s1 & MASK32), Number(s1 >> 32n));
}

/** The generator from its four 32-bit state words, not all zero. */
export function xoshiro128(a: number, b: number, c: number, d: number): Random {
  let s0 = a | 0;
  let s1 = b | 0;
  let s2 = c | 0;
  let s3 = d | 0;
  let spare = Number.NaN;
  const bits = (): number => {
    const product = Math.imul(s1, 5);
    const result = Math.imul((product << 7) | (product >>> 25), 9);
    const t = s1 << 9;
    s2 ^= s0;
    s3 ^= s1;
    s1 ^= s2;
    s0 ^= s3;
    s2 ^= t;
    s3 = (s3 << 11) | (s3 >>> 21);
    return result >>> 0;
  };
  const uniform = (): number => ((bits() >>> 5) * 2 ** 26 + (bits() >>> 6)) * 2 ** -53;
  const normal = (): number => {
    if (!Number.isNaN(spare)) {
      const kept = spare;
      spare = Number.NaN;
      return kept;
    }
    for (;;) {
      const x = 2 * uniform() - 1;
      const y = 2 * uniform() - 1;
      const square = x * x + y * y;
      if (square < 1 && square > 0) {
        const factor = Math.sqrt((-2 * Math.log(square)) / square);
        spare = y * factor;
        return x * factor;
      }
    }
  };
  return {bits, uniform, normal};
}

/** `count` standard normal deviates. */
export function normalDeviates(random: Random, count: number): Float64Array {
  const deviates = new Float64Array(count);
  for (let i = 0; i < count; ++i) deviates[i] = random.normal();
  return deviates;
}

const MASK32 = 0xffff_ffffn;
const MASK64 = 0xffff_ffff_ffff_ffffn;

/** The first `count` outputs of SplitMix64. */
export function splitMix64(seed: bigint, count: number): bigint[] {
  const outputs: bigint[] = [];
  let state = seed & MASK64;
  for (let i = 0; i < count; ++i) {
    state = (state + 0x9e37_79b9_7f4a_7c15n) & MASK64;
    let z = state;
    z = ((z ^ (z >> 30n)) * 0xbf58_476d_1ce4_e5b9n) & MASK64;
    z = ((z ^ (z >> 27n)) * 0x94d0_49bb_1331_11ebn) & MASK64;
    outputs.push(z ^ (z >> 31n));
  }
  return outputs;
}
