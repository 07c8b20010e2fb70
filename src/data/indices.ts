import { one } from "../units/unit.js";
import type { Distribution } from "./distribution.js";
import { type Figure, figure, type Known } from "./figure.js";
import type { Response } from "./response.js";

/** Péclet number u L / D of the closed dispersion model with this variance / mean^2; undefined where there is none (>= 1). */
export function closedPeclet(relativeVariance: number): number | undefined {
  if (!(relativeVariance > 0) || relativeVariance >= 1) return undefined;
  // sigma^2 = 2/Pe - 2/Pe^2 (1 - exp(-Pe)) falls from 1 to 0 (van der Laan, Chem. Eng. Sci. 7 (1958) 187).
  const spread = (pe: number): number => (pe < 1e-4 ? 1 - pe / 3 : 2 / pe + (2 * Math.expm1(-pe)) / (pe * pe));
  let [low, high] = [0, 4 / relativeVariance];
  for (let i = 0; i < 200 && high - low > 1e-15 * high; i++) {
    const middle = (low + high) / 2;
    if (spread(middle) > relativeVariance) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

const panels = 1000;

/**
 * Danckwerts' holdback, (1/tau) times the integral of F to tau: 0 plug flow, 0.368 well mixed, more with dead water
 * (P. V. Danckwerts, Chem. Eng. Sci. 2 (1953) 1-13).
 */
export function holdback({ cumulative }: Distribution, tau: number): number {
  let sum = 0;
  for (let i = 0; i < panels; i++) sum += cumulative(((i + 0.5) * tau) / panels);
  return sum / panels;
}

/**
 * Danckwerts' segregation: the area between F of a well-mixed vessel and F, up to where they cross, over theta = t/tau.
 * 0.368 plug flow, 0 well mixed, negative with much dead water. Same source.
 */
export function segregation({ cumulative }: Distribution, tau: number): number {
  const until = 8;
  let sum = 0;
  let extreme = 0;
  for (let i = 0; i < 4 * panels; i++) {
    const theta = ((i + 0.5) * until) / (4 * panels);
    sum += ((-Math.expm1(-theta) - cumulative(theta * tau)) * until) / (4 * panels);
    // The area up to the crossing is where the running area is farthest from 0.
    if (Math.abs(sum) > Math.abs(extreme)) extreme = sum;
  }
  return extreme;
}

/** Derivative of a figure by a central difference of a thousandth; its size. */
export function slopeOf(of: (x: number) => number | undefined, x: number): number {
  const [a, b] = [of(0.999 * x), of(1.001 * x)];
  return a === undefined || b === undefined ? Number.NaN : Math.abs((b - a) / (0.002 * x));
}

/**
 * One standard error of an area under F over tau: tau's own, and what is unsure of F, taken as if it were off to one side all the
 * way (careful: noise alone mostly averages out).
 */
export const areaError = (of: (tau: number) => number, tau: Known & { readonly error: number }): number =>
  Math.hypot(slopeOf(of, tau.value) * (tau.sd ?? 0), tau.error);

/** Mean of values up to a time, by the points there. */
export function meanOver(time: Float64Array, values: Float64Array, until: number): number {
  let [sum, count] = [0, 0];
  for (let i = 0; i < time.length && time[i] <= until; i++) {
    sum += values[i];
    count++;
  }
  return count > 0 ? sum / count : 0;
}

/**
 * Time of the highest reading over tau (J. Persson, N. L. G. Somes, T. H. F. Wong, Water Sci. Technol. 40(3) (1999) 291-300): above
 * 0.75 good, up to 0.5 poor (from memory). Its error is what the noise of the top and the gaps beside it leave open.
 */
export function efficiency({ time, value, sd }: Response, tau: Known): Figure {
  const top = value.reduce((best, v, i) => (v > value[best] ? i : best), 0);
  const near = [...value.keys()].filter((i) => value[i] + 2 * sd[i] >= value[top]);
  const low = time[Math.max(0, near[0] - 1)];
  const high = time[Math.min(time.length - 1, near[near.length - 1] + 1)];
  // Anywhere between them alike.
  const error = (high - low) / Math.sqrt(12);
  const mode = time[top];
  return figure(
    mode > 0 ? mode / tau.value : undefined,
    one,
    Math.hypot(error, (mode * (tau.sd ?? 0)) / tau.value) / tau.value,
  );
}
