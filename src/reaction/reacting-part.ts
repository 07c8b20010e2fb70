import type { Disturbed, Response } from "./disturbed.js";

/** What a reaction or a wall changes counts above this, beside the largest. */
const small = 1e-9;

/** The parts into which disturbances of a group fall. */
export interface Parts {
  /** What reactions change. */
  readonly reacting: Disturbed | undefined;
  /** What they leave alone and only mixes: one combination stands for all. */
  readonly mixing: Disturbed | undefined;
}

/**
 * Disturbances within what reactions change stay there, and sums that no reaction changes (elements; with adiabatic bodies heat
 * and amounts together) only mix, each like the others: their zeros would stand several times in one place.
 */
export function partsOf(group: Disturbed): Parts {
  const { size: n, slopes, responses, inlets } = group;
  // An exchanger brings the temperature alone: all is tied to all.
  if (inlets.some((list) => list.some((inlet) => inlet.only !== undefined)))
    return { reacting: group, mixing: undefined };
  const [re, im] = [new Float64Array(n * n), new Float64Array(n * n)];
  const columns: Float64Array[] = [];
  const add = (a: Float64Array, less: number): void => {
    for (let j = 0; j < n; j++)
      columns.push(Float64Array.from({ length: n }, (_, i) => a[i * n + j] - (i === j ? less : 0)));
  };
  for (const slope of slopes) if (slope) add(slope, 0);
  for (const response of responses) {
    if (!response) continue;
    response.write(0, 0, re, im);
    add(re, 1);
  }
  const largest = columns.reduce((most, c) => Math.max(most, length(c)), 0);
  const basis: Float64Array[] = [];
  for (const column of columns) extend(basis, column, small * largest);
  const whole = basis.slice();
  for (let i = 0; i < n && whole.length === basis.length; i++) {
    const unit = new Float64Array(n);
    unit[i] = 1;
    extend(whole, unit, 0.1 / n);
  }
  return {
    reacting: basis.length > 0 ? within(group, basis) : undefined,
    mixing: whole.length > basis.length ? within(group, whole.slice(basis.length)) : undefined,
  };
}

/** Adds what of a vector stands at right angles to a basis, where that is longer than `least`. */
function extend(basis: Float64Array[], vector: Float64Array, least: number): void {
  let rest = vector;
  // Twice: rounding of the first time is taken out as well.
  for (let round = 0; round < 2; round++) {
    for (const b of basis) {
      const along = b.reduce((sum, x, i) => sum + x * rest[i], 0);
      rest = rest.map((x, i) => x - along * b[i]);
    }
  }
  const size = length(rest);
  if (size > least) basis.push(rest.map((x) => x / size));
}

const length = (v: Float64Array): number => Math.sqrt(v.reduce((sum, x) => sum + x * x, 0));

/** The group in the coordinates of a basis. */
function within(group: Disturbed, basis: readonly Float64Array[]): Disturbed {
  const [n, r] = [group.size, basis.length];
  const turn = (a: Float64Array, out: Float64Array): void => {
    for (let p = 0; p < r; p++) {
      for (let q = 0; q < r; q++) {
        let sum = 0;
        for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) sum += basis[p][i] * a[i * n + j] * basis[q][j];
        out[p * r + q] = sum;
      }
    }
  };
  const [re, im] = [new Float64Array(n * n), new Float64Array(n * n)];
  return {
    ...group,
    size: r,
    slopes: group.slopes.map((a) => {
      const own = a && new Float64Array(r * r);
      if (a && own) turn(a, own);
      return own;
    }),
    responses: group.responses.map(
      (response): Response | undefined =>
        response && {
          ...response,
          write(sRe, sIm, outRe, outIm) {
            response.write(sRe, sIm, re, im);
            turn(re, outRe);
            turn(im, outIm);
          },
        },
    ),
  };
}
