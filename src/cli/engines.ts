import type { Plant } from "../compile/plant.js";
import { isCellsOnly } from "../simulate/cell-system.js";
import { chebyshev } from "../simulate/chebyshev.js";
import { exact } from "../simulate/exact.js";
import { krylov } from "../simulate/krylov.js";
import { laplace } from "../simulate/laplace.js";
import { ode } from "../simulate/ode.js";
import { type AnyEngine, engineFor } from "../simulate/trace.js";
import type { SimulateOptions } from "./simulate-options.js";
import { UsageError } from "./usage.js";

/** The engine by its name; `auto` is the one that suits the plant and the last time asked, s. */
export function engineNamed(name: SimulateOptions["engine"], plant: Plant, until: number): AnyEngine {
  const named = { auto: undefined, exact, ode, laplace, chebyshev, krylov }[name];
  if ((named === chebyshev || named === krylov) && !isCellsOnly(plant)) {
    throw new UsageError(`--engine ${name} is for stirred bodies and junctions alone; auto takes one that suits`);
  }
  return named ?? engineFor(plant, until);
}

/** Nodes up to which integration in time, whose implicit steps eliminate, checks also the ways for large networks. */
const mostIntegrated = 2000;

/** An independent engine to check another by: integration in time, or for the largest networks the other of their two ways. */
export function engineBeside(engine: AnyEngine, plant: Plant): AnyEngine {
  const large = engine === chebyshev || engine === krylov;
  if (large && plant.columns.size <= mostIntegrated) return ode;
  if (engine === chebyshev) return krylov;
  if (engine === krylov) return chebyshev;
  if (engine !== ode) return ode;
  const other = engineFor(plant);
  return other === ode ? laplace : other;
}

/** Largest difference between two sets of curves, as a fraction of the largest value of the first. */
export function largestDifference(a: readonly Float64Array[], b: readonly Float64Array[]): number {
  let peak = 0;
  let most = 0;
  a.forEach((curve, i) => {
    for (let k = 0; k < curve.length; k++) {
      peak = Math.max(peak, Math.abs(curve[k]));
      const difference = Math.abs(curve[k] - b[i][k]);
      // A point that one engine does not have is no agreement.
      most = Number.isNaN(difference) ? Number.POSITIVE_INFINITY : Math.max(most, difference);
    }
  });
  return most === 0 ? 0 : most / peak;
}
