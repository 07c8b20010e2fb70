import type { Plant } from "../compile/plant.js";
import type { Complex } from "../numerics/complex.js";
import { gain } from "./gain.js";
import { NodeEquations } from "./node-equations.js";

/**
 * The transfer function of a plant at every outlet: the Laplace transform of the flow of tracer that leaves there after a
 * unit pulse into one place. At s = 0 it is the outlet's share; at a real s = k it is what a first-order reaction of rate
 * constant k, the same everywhere, leaves unconverted (open ends of `dispersed` left out: they react between their ends
 * only). Exact for every kind of compartment: no curve is computed.
 *
 * @param s    1/s; a number, a complex number, or many of either. Right of all singularities, or continued to the left
 *             of them; a real s where the continuation is not real (laminar flow, open ends) gives NaN
 * @param from name of a feed or compartment that the tracer is put into; default: the first feed
 * @returns by outlet, in the form of s: a number for a number, a Float64Array for many
 * @throws RangeError where there is no such place
 * @see P.V. Danckwerts, Chem. Eng. Sci. 2 (1953) 1-13 (first order from the exit-age distribution); the formulas of the kinds
 *      stand in `src/compartments`
 */
export function transferFunction(plant: Plant, s: number, from?: string): Record<string, number>;
export function transferFunction(plant: Plant, s: Complex, from?: string): Record<string, Complex>;
export function transferFunction(plant: Plant, s: readonly Complex[], from?: string): Record<string, Complex[]>;
export function transferFunction(plant: Plant, s: ArrayLike<number>, from?: string): Record<string, Float64Array>;
export function transferFunction(
  plant: Plant,
  s: number | Complex | readonly Complex[] | ArrayLike<number>,
  from = plant.feeds[0]?.name,
): Record<string, number | Complex | Complex[] | Float64Array> {
  const entry = plant.entry.get(from);
  if (entry === undefined) throw new RangeError(`no place '${from}' in the network`);
  const points = typeof s === "object" && "length" in s ? Array.from<number | Complex>(s) : [s];
  const rows = responses(
    plant,
    entry,
    points.map((p) => (typeof p === "number" ? { re: p, im: 0 } : p)),
  );
  const real = points.every((p) => typeof p === "number");
  return Object.fromEntries(
    plant.outlets.map(({ name }, o) => {
      const values = rows.map((row) => row[o]);
      if (typeof s === "number") return [name, realPart(values[0])];
      if (!("length" in s)) return [name, values[0]];
      return [name, real ? Float64Array.from(values, realPart) : values];
    }),
  );
}

/** [s][outlet] */
function responses(plant: Plant, entry: number, points: readonly Complex[]): Complex[][] {
  const equations = new NodeEquations(plant);
  const { gainRe, gainIm } = equations;
  const re = new Float64Array(plant.nodes.length);
  const im = new Float64Array(plant.nodes.length);
  return points.map((s) => {
    plant.nodes.forEach((node, i) => {
      const g = gain(node, s);
      gainRe[i] = g.re;
      gainIm[i] = g.im;
    });
    if (!equations.factor()) return plant.outlets.map(() => ({ re: Number.NaN, im: Number.NaN }));
    re.fill(0);
    im.fill(0);
    const { inflow } = plant.nodes[entry];
    if (inflow > 0) {
      re[entry] = gainRe[entry] / inflow;
      im[entry] = gainIm[entry] / inflow;
    }
    equations.solve(re, im);
    return plant.outlets.map(({ node }) => ({
      re: re[node] * plant.nodes[node].inflow,
      im: im[node] * plant.nodes[node].inflow,
    }));
  });
}

/** NaN where the value is not real, but for rounding. */
const realPart = ({ re, im }: Complex): number => (Math.abs(im) <= 1e-9 * Math.abs(re) ? re : Number.NaN);
