/** A seeded stream of random numbers; every stream owns its state. */
export interface Random {
  /** Uniform in [0, 1), 53 bits. */
  uniform(): number;
  /** Standard normal. */
  normal(): number;
  /** Integer in 0..n-1, every one equally likely; n up to 2^32. */
  below(n: number): number;
}

/**
 * xoshiro128**, seeded through splitmix32-style mixing so that near seeds give unrelated streams.
 * @param seed any finite number; its 53 integer bits count
 * @see D. Blackman, S. Vigna, ACM Trans. Math. Softw. 47 (2021) 36; normal deviates: G. Marsaglia, T.A. Bray, SIAM Rev. 6 (1964) 260-264
 */
export function random(seed: number): Random {
  const s = seeded(seed);
  const bits = (): number => {
    const result = Math.imul(rotate(Math.imul(s[1], 5), 7), 9) >>> 0;
    const t = s[1] << 9;
    s[2] ^= s[0];
    s[3] ^= s[1];
    s[1] ^= s[2];
    s[0] ^= s[3];
    s[2] ^= t;
    s[3] = rotate(s[3], 11);
    return result;
  };
  const uniform = (): number => ((bits() >>> 5) * 2 ** 26 + (bits() >>> 6)) / 2 ** 53;
  let spare: number | undefined;
  const normal = (): number => {
    if (spare !== undefined) {
      const kept = spare;
      spare = undefined;
      return kept;
    }
    for (;;) {
      const u = 2 * uniform() - 1;
      const v = 2 * uniform() - 1;
      const r = u * u + v * v;
      if (r >= 1 || r === 0) continue;
      const factor = Math.sqrt((-2 * Math.log(r)) / r);
      spare = v * factor;
      return u * factor;
    }
  };
  const below = (n: number): number => {
    const fair = 2 ** 32 - (2 ** 32 % n); // draws past the last whole multiple of n would favour small numbers
    for (;;) {
      const draw = bits();
      if (draw < fair) return draw % n;
    }
  };
  return { uniform, normal, below };
}

const rotate = (x: number, k: number): number => (x << k) | (x >>> (32 - k));

/** Four words from a seed by a counter and the murmur3 finaliser. */
function seeded(seed: number): Int32Array {
  const low = seed >>> 0;
  const high = Math.floor(seed / 2 ** 32) >>> 0;
  const state = new Int32Array(4);
  let counter = low ^ Math.imul(high, 0x85ebca6b);
  for (let i = 0; i < 4; i++) {
    counter = (counter + 0x9e3779b9) | 0;
    let z = counter ^ (high + i);
    z = Math.imul(z ^ (z >>> 16), 0x85ebca6b);
    z = Math.imul(z ^ (z >>> 13), 0xc2b2ae35);
    state[i] = z ^ (z >>> 16);
  }
  if (state.every((word) => word === 0)) state[0] = 1;
  return state;
}
