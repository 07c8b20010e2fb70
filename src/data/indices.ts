import type { Distribution } from "./distribution.js";

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
