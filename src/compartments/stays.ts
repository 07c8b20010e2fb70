import { incompleteGamma, poissonTerm } from "../numerics/special-functions.js";

/** How long parcels that stay by themselves are on their way, x in units of the mean stay: a density with area 1 and mean 1. */
export interface Stays {
  /** Nobody stays shorter. */
  readonly from: number;
  readonly density: (x: number) => number;
  /** Share that stays longer than x. */
  readonly washout: (x: number) => number;
  /** Ascending, above `from`: no stretch between two of them is hard to follow; at the last the washout is 1e-16 or less. */
  readonly marks: readonly number[];
}

/** Share of the parcels that may be left at the last mark. */
const left = 1e-16;

/** The stays in `tanks` equal stirred tanks in series, any real number from 1. B.A. Buffham, L.G. Gibilaro, AIChE J. 14 (1968) 805-806. */
export function gammaStays(tanks: number): Stays {
  const washout = (x: number): number => incompleteGamma(tanks, tanks * x).above;
  const width = 1 / Math.sqrt(tanks);
  let end = 1 + 6 * width;
  while (washout(end) > left) end += width;
  const marks = [-6, -3, -1.5, 0, 1.5, 3, 6].map((k) => 1 + k * width).filter((x) => x > 0 && x < end);
  const atStart = tanks === 1 ? 1 : 0;
  return {
    from: 0,
    density: (x) => (x > 0 ? (tanks / x) * poissonTerm(tanks, tanks * x) : atStart),
    washout,
    marks: [...marks, end],
  };
}

/** Laminar flow in a round tube: nobody leaves before half the mean, then 1 / (2 x^3). Bosworth, Phil. Mag. 39 (1948) 847-862. */
export const laminarStays: Stays = {
  from: 0.5,
  density: (x) => 1 / (2 * x * x * x),
  washout: (x) => 1 / (4 * x * x),
  marks: Array.from({ length: 27 }, (_, k) => 2 ** k),
};
