import { random } from "./random.js";

/**
 * An endless sequence of points that fill the open unit cube evenly: Halton's, with the digits of every base permuted at
 * random (which breaks the stripes of high dimensions) and a random shift, all from the seed.
 * @param n    dimensions, up to 40
 * @returns    a function that gives the next point, a fresh array of length n
 * @throws RangeError above 40 dimensions
 * @see J.H. Halton, Numer. Math. 2 (1960) 84-90; E. Braaten, G. Weller, J. Comput. Phys. 33 (1979) 249-258 (permuted digits);
 *      R. Cranley, T.N.L. Patterson, SIAM J. Numer. Anal. 13 (1976) 904-914 (shift)
 */
export function lowDiscrepancy(n: number, seed: number): () => Float64Array {
  if (n > primes.length)
    throw new RangeError(`low-discrepancy points have at most ${primes.length} dimensions, got ${n}`);
  const draw = random(seed);
  const digits = primes.slice(0, n).map((base) => permutation(base, draw.below));
  const shift = Float64Array.from({ length: n }, () => draw.uniform());
  let index = 0;
  return () => {
    index++;
    return Float64Array.from({ length: n }, (_, j) => {
      const x = (radicalInverse(index, primes[j], digits[j]) + shift[j]) % 1;
      return Math.min(Math.max(x, 2 ** -53), 1 - 2 ** -53);
    });
  };
}

const primes = [
  2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37, 41, 43, 47, 53, 59, 61, 67, 71, 73, 79, 83, 89, 97, 101, 103, 107, 109,
  113, 127, 131, 137, 139, 149, 151, 157, 163, 167, 173,
];

/** The digits of `index` mirrored at the point; 0 keeps its place so that the endless zeros in front add nothing. */
function radicalInverse(index: number, base: number, digits: Int32Array): number {
  let place = 1 / base;
  let value = 0;
  for (let rest = index; rest > 0; rest = Math.floor(rest / base)) {
    value += digits[rest % base] * place;
    place /= base;
  }
  return value;
}

/** 0 first, then 1..base-1 in random order (Fisher & Yates). */
function permutation(base: number, below: (n: number) => number): Int32Array {
  const order = Int32Array.from({ length: base }, (_, i) => i);
  for (let i = base - 1; i > 1; i--) {
    const k = 1 + below(i);
    const held = order[i];
    order[i] = order[k];
    order[k] = held;
  }
  return order;
}
