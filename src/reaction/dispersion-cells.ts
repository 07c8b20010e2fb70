import { type BlockMatrix, block, blockMatrix, solveBlocks } from "./block-matrix.js";
import type { Kinetics } from "./kinetics.js";
import { type BlockSystem, solveNewton } from "./newton.js";

/**
 * Axial dispersion between closed ends as equal mixed cells in a row, with the exchange between them that spreads as much:
 * error falls with the square of their number from Pe/2 cells on.
 * @see R.B. MacMullin, M. Weber, Trans. AIChE 31 (1935) 409-458; R.J. Roemer, L.D. Durbin, Ind. Eng. Chem. Fundam. 6 (1967) 120-129
 */
export function cellsInRow(kinetics: Kinetics, peclet: number, fed: ArrayLike<number>, count: number): BlockSystem {
  const n = kinetics.size;
  const back = Math.max(count / peclet - 0.5, 0);
  const slope = new Float64Array(n * n);
  const made = new Float64Array(n);
  return {
    count,
    size: n,
    memory: new Float64Array(count).fill(1 / count),
    residual(y, f) {
      for (let k = 0; k < count; k++) {
        kinetics.production(y, k * n, made, 0);
        const forward = k > 0 ? 1 + back : 1;
        for (let i = 0; i < n; i++) {
          const here = y[k * n + i];
          const above = k > 0 ? y[(k - 1) * n + i] : fed[i];
          const below = k + 1 < count ? y[(k + 1) * n + i] : here;
          f[k * n + i] = forward * (above - here) + back * (below - here) + made[i] / count;
        }
      }
      return f.every(Number.isFinite);
    },
    jacobian(y, m) {
      for (let k = 0; k < count; k++) {
        kinetics.jacobian(y, k * n, slope, 0);
        const d = block(m, k, k);
        for (let e = 0; e < n * n; e++) d[e] += slope[e] / count;
        for (let i = 0; i < n; i++) {
          d[i * n + i] -= (k > 0 ? 1 + back : 1) + (k + 1 < count ? back : 0);
          if (k > 0) block(m, k, k - 1)[i * n + i] += 1 + back;
          if (k + 1 < count) block(m, k, k + 1)[i * n + i] += back;
        }
      }
      return true;
    },
  };
}

/** Cells on the coarsest of three levels, each with twice as many as the one before; and the most that the finest may have. */
const coarsest = 200;
const most = 8000;
/** How far the last two extrapolations may be apart, scaled. */
const enough = 1e-7;

/**
 * The outlet of a dispersed body by cells, extrapolated from three levels (Richardson): where nothing smoother converges.
 * @returns false where a level does not settle, or the levels do not agree to 1e-7
 */
export function dispersionInCells(
  kinetics: Kinetics,
  peclet: number,
  y: Float64Array,
  sensitivity?: Float64Array,
): boolean {
  const n = kinetics.size;
  const first = Math.max(coarsest, Math.ceil(peclet));
  if (4 * first > most) return false;
  let profile: Float64Array | undefined;
  const ends: Float64Array[] = [];
  const slopes: Float64Array[] = [];
  for (const count of [first, 2 * first, 4 * first]) {
    const before: Float64Array | undefined = profile;
    const state = new Float64Array(count * n);
    for (let k = 0; k < count; k++) state.set(before ? before.subarray((k >> 1) * n, (k >> 1) * n + n) : y, k * n);
    const system = cellsInRow(kinetics, peclet, y, count);
    if (!solveNewton(system, state).converged) return false;
    profile = state;
    ends.push(state.slice(-n));
    if (sensitivity) {
      const moved = endSlopes(system, state);
      if (!moved) return false;
      slopes.push(moved);
    }
  }
  const end = extrapolated(ends);
  if (end.error > enough) return false;
  for (let i = 0; i < n; i++) y[i] = Math.max(end.value[i], 0);
  sensitivity?.set(extrapolated(slopes).value);
  return true;
}

/** d(outlet)/d(inlet): the first cell takes what enters with weight 1. */
function endSlopes(system: BlockSystem, y: Float64Array): Float64Array | undefined {
  const { count, size: n } = system;
  const m: BlockMatrix = blockMatrix(count, n);
  if (!system.jacobian(y, m)) return undefined;
  const slopes = new Float64Array(n * n);
  for (let j = 0; j < n; j++) {
    const b = new Float64Array(count * n);
    b[j] = -1;
    if (!solveBlocks(m, b)) return undefined;
    for (let i = 0; i < n; i++) slopes[i * n + j] = b[(count - 1) * n + i];
  }
  return slopes;
}

/** From levels h, h/2, h/4 of something with an error in even powers of h. */
function extrapolated([a, b, c]: readonly Float64Array[]): { value: Float64Array; error: number } {
  let error = 0;
  const value = a.map((x, i) => {
    const [coarse, fine] = [(4 * b[i] - x) / 3, (4 * c[i] - b[i]) / 3];
    error = Math.max(error, Math.abs(fine - coarse));
    return fine;
  });
  return { value, error };
}
