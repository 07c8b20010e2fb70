const ratio = (Math.sqrt(5) - 1) / 2;

/**
 * The largest value of a function with one peak between two points. NaN counts as lowest.
 * @param tolerance on x, absolute
 * @see J. Kiefer, Proc. Amer. Math. Soc. 4 (1953) 502-506 (golden-section search)
 */
export function goldenSection(
  f: (x: number) => number,
  from: number,
  to: number,
  tolerance: number,
): { readonly x: number; readonly value: number } {
  const at = (x: number): number => {
    const v = f(x);
    return Number.isNaN(v) ? Number.NEGATIVE_INFINITY : v;
  };
  let [low, high] = [from, to];
  let [a, b] = [high - ratio * (high - low), low + ratio * (high - low)];
  let [fa, fb] = [at(a), at(b)];
  while (high - low > tolerance) {
    if (fa >= fb) {
      [high, b, fb] = [b, a, fa];
      a = high - ratio * (high - low);
      fa = at(a);
    } else {
      [low, a, fa] = [a, b, fb];
      b = low + ratio * (high - low);
      fb = at(b);
    }
  }
  return fa >= fb ? { x: a, value: fa } : { x: b, value: fb };
}
