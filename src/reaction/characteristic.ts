import { type ComplexBuffer, determinantDirection, zerosRightOf } from "../numerics/half-plane.js";
import type { Disturbed } from "./disturbed.js";
import type { Mode } from "./mode.js";
import { partsOf } from "./reacting-part.js";

const mostUnknowns = 60;
/** Radii, in rates of the quickest cell and of the shortest way. */
const wide = 4;
const turns = 11.37;

/**
 * How a small disturbance goes on where circles hold tubes and other bodies: zeros of the determinant of the balances in the
 * Laplace variable. A disturbance that enters a tube leaves it a space time later, multiplied by how its outlet leans on its
 * inlet, so this is exact for tubes.
 * @param fully find the growth itself; else only whether it grows (1/s, of the right sign, of no meaning in size)
 * @returns undefined where the zeros could not be counted
 * @see R. Bellman, K.L. Cooke, Differential-Difference Equations, Academic Press 1963, ch. 12 (from memory)
 */
export function delayedMode(group: Disturbed, fully: boolean): Mode | undefined {
  const { reacting, mixing } = partsOf(group);
  const found = reacting && modeOf(reacting, fully);
  if (reacting && !found) return undefined;
  if (found?.rough && fully) return found;
  // What only mixes always fades.
  const other = mixing && (fully || !found) ? modeOf(mixing, fully) : undefined;
  return found && (!other || found.growth >= other.growth) ? found : other;
}

function modeOf(group: Disturbed, fully: boolean): Mode | undefined {
  const N = group.count * group.size;
  if (N > mostUnknowns) return undefined;
  const delays = group.responses.flatMap((r) => (r && r.delay > 0 ? [r.delay] : []));
  const cells = Array.from(group.memory).filter((t) => t > 0);
  const times = [...delays, ...cells];
  if (times.length === 0) return undefined;
  const slowest = times.reduce((sum, t) => sum + t, 0);
  const steep = group.slopes.reduce((most, s) => Math.max(most, s ? norm(s, group.size) : 0), 0);
  const radius = Math.max(
    delays.length > 0 ? (turns * 2 * Math.PI) / Math.min(...delays) : 0,
    cells.length > 0 ? (wide * (4 + steep)) / Math.min(...cells) : 0,
  );
  const count = (sigma: number): number | undefined => {
    const h = characteristic(group, sigma);
    const near = zerosRightOf(h, sigma, radius, slowest);
    return near === undefined
      ? undefined
      : near > 0 || zerosRightOf(h, sigma, 2.3 * radius, slowest) === near
        ? near
        : undefined;
  };
  const growing = count(0);
  if (growing === undefined) return undefined;
  const swings = growing > 0 && growing % 2 === 0;
  if (!fully || group.responses.some((r) => r?.lingers)) {
    return { growth: (growing > 0 ? 1 : -1) / slowest, swing: swings ? 1 / slowest : 0, rough: true };
  }
  return rightmost(group, growing > 0, count, slowest, radius);
}

/** The zero farthest to the right: the line that it lies on by halving, then its place on it. */
function rightmost(
  group: Disturbed,
  grows: boolean,
  count: (sigma: number) => number | undefined,
  slowest: number,
  radius: number,
): Mode | undefined {
  let [low, high] = grows ? [0, 0.1 / slowest] : [-0.1 / slowest, 0];
  for (let k = 0; ; k++) {
    const there = count(grows ? high : low);
    if (there === undefined || k > 30) return undefined;
    if (grows ? there === 0 : there > 0) break;
    if (grows) [low, high] = [high, 3 * high];
    else [low, high] = [3 * low, low];
  }
  for (let k = 0; k < 12; k++) {
    const middle = (low + high) / 2;
    const there = count(middle);
    if (there === undefined) break;
    if (there > 0) low = middle;
    else high = middle;
  }
  const growth = (low + high) / 2;
  // One zero of an odd number is real; else it is looked for by how far the value turns beside the line.
  const between = count(low);
  if (between === undefined || between % 2 === 1) return { growth, swing: 0 };
  return { growth, swing: swingAt(group, growth, (high - low) / 2 || 1e-6 / slowest, radius) };
}

/** Where along a line the determinant turns most: beside its zero. */
function swingAt(group: Disturbed, sigma: number, away: number, radius: number): number {
  const h = characteristic(group, sigma - 3 * away);
  const [a, b]: ComplexBuffer[] = [
    { re: 0, im: 0 },
    { re: 0, im: 0 },
  ];
  let best = { turn: 0, at: 0 };
  const steps = 4000;
  for (let k = 0; k < steps; k++) {
    const [from, to] = [k, k + 1].map((j) => radius * (j / steps) ** 2);
    h(sigma + 2 * away, from, a);
    h(sigma + 2 * away, to, b);
    const turn = Math.abs(Math.atan2(a.re * b.im - a.im * b.re, a.re * b.re + a.im * b.im)) / (to - from);
    if (k > 0 && turn > best.turn) best = { turn, at: (from + to) / 2 };
  }
  return best.at;
}

/** The determinant over that of bodies without memory: without poles right of sigma, and bounded. */
function characteristic(
  { count, size: n, memory, slopes, responses, inlets }: Disturbed,
  sigma: number,
): (re: number, im: number, out: ComplexBuffer) => void {
  const N = count * n;
  const [mRe, mIm] = [new Float64Array(N * N), new Float64Array(N * N)];
  const [gRe, gIm] = [new Float64Array(n * n), new Float64Array(n * n)];
  return (re, im, out) => {
    mRe.fill(0);
    mIm.fill(0);
    for (let k = 0; k < count; k++) {
      const response = responses[k];
      response?.write(re, im, gRe, gIm);
      for (const { from, share, only } of inlets[k]) {
        for (let i = 0; i < n; i++) {
          for (let j = 0; j < n; j++) {
            if (only !== undefined && j !== only) continue;
            const at = (k * n + i) * N + from * n + j;
            if (response) {
              mRe[at] += share * gRe[i * n + j];
              mIm[at] += share * gIm[i * n + j];
            } else if (i === j) mRe[at] += share;
          }
        }
      }
      const slope = slopes[k];
      for (let i = 0; i < n; i++) {
        const row = (k * n + i) * N;
        mRe[row + k * n + i] -= 1 + memory[k] * re;
        mIm[row + k * n + i] -= memory[k] * im;
        if (slope) for (let j = 0; j < n; j++) mRe[row + k * n + j] += slope[i * n + j];
        if (!(memory[k] > 0)) continue;
        const [a, b] = [1 + memory[k] * (re - sigma), memory[k] * im];
        const d = a * a + b * b;
        for (let j = row; j < row + N; j++) {
          const [x, y] = [mRe[j], mIm[j]];
          mRe[j] = (x * a + y * b) / d;
          mIm[j] = (y * a - x * b) / d;
        }
      }
    }
    determinantDirection(mRe, mIm, N, out);
  };
}

/** Largest sum of a row. */
function norm(a: Float64Array, n: number): number {
  let most = 0;
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let j = 0; j < n; j++) sum += Math.abs(a[i * n + j]);
    most = Math.max(most, sum);
  }
  return most;
}
