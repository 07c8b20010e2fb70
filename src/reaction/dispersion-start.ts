import { type CollocationMesh, meshOf } from "../numerics/collocation.js";
import { cellsInRow } from "./dispersion-cells.js";
import type { Kinetics } from "./kinetics.js";
import { solveNewton } from "./newton.js";

const cells = 32;
const mostStretches = 300;
/** A reactant below this, scaled, is followed no further. */
const gone = 1e-13;

/** A first idea of the profile in a dispersed body, from a few mixed cells, as concentrations and fluxes. */
export function firstProfile(kinetics: Kinetics, peclet: number, fed: Float64Array): CollocationMesh | undefined {
  const n = kinetics.size;
  const y = new Float64Array(cells * n);
  for (let k = 0; k < cells; k++) y.set(fed, k * n);
  if (!solveNewton(cellsInRow(kinetics, peclet, fed, cells), y).converged) return undefined;
  const state = new Float64Array(2 * n);
  const at = (x: number): Float64Array => {
    const place = Math.min(Math.max(x * cells - 0.5, 0), cells - 1);
    const k = Math.min(Math.floor(place), cells - 2);
    const part = place - k;
    for (let i = 0; i < n; i++) {
      const [a, b] = [y[k * n + i], y[(k + 1) * n + i]];
      // Between cells concentrations fall by a factor, as most reactions make them.
      state[i] = a > 0 && b > 0 ? a * (b / a) ** part : a + part * (b - a);
      state[n + i] = state[i];
    }
    return state;
  };
  const edges = edgesFor(kinetics, peclet, at);
  return edges && meshOf(edges, 2 * n, at);
}

/**
 * Stretches of at most an eighth, in which no reactant falls by more than about e^2, and shorter ones towards the outlet,
 * where the profile flattens out within 1/Pe. Undefined where that takes too many.
 */
function edgesFor(kinetics: Kinetics, peclet: number, at: (x: number) => Float64Array): Float64Array | undefined {
  const n = kinetics.size;
  const slope = new Float64Array(n * n);
  const edges = [0];
  for (let x = 0; x < 1; ) {
    const here = at(x);
    kinetics.jacobian(here, 0, slope, 0);
    let fastest = 0;
    for (let i = 0; i < n; i++) if (here[i] > gone) fastest = Math.max(fastest, -slope[i * n + i]);
    const fall = (2 * fastest) / (1 + Math.sqrt(1 + (4 * fastest) / peclet));
    const toEnd = Math.max((1 - x) / 2, 2 / peclet);
    const width = Math.min(1 / 8, 2 / fall, toEnd);
    x = x + 1.01 * width >= 1 ? 1 : x + width;
    edges.push(x);
    if (edges.length > mostStretches) return undefined;
  }
  return Float64Array.from(edges);
}
