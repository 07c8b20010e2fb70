import { requireCarried } from "../compile/carried.js";
import type { Plant } from "../compile/plant.js";
import type { PlantSlope } from "../compile/plant-slopes.js";
import { isClosed } from "../model/network.js";
import { SteadyEquations } from "../transfer/steady-equations.js";
import type { Entry } from "./entry.js";
import { cut } from "./halts.js";
import { type Along, addParts, type Curve } from "./laplace-curves.js";
import { type Passing, passings } from "./laplace-gain.js";
import { type Passes, passes } from "./laplace-passes.js";
import { passesSlope } from "./laplace-passes-slope.js";
import { type Drive, driveAt } from "./linear-system.js";
import { putIn } from "./moments.js";
import type { Balance, Seen } from "./respond.js";
import type { NodeLook, TracerWay, Tracing } from "./tracing.js";

/**
 * Parts of the tracer: what delays have less of, so far from s = 0, is smooth enough to be left in one piece behind the copies.
 * Where that piece cannot be inverted, the next; the last leaves nothing.
 */
const roughness = [Number.POSITIVE_INFINITY, 1e-6, 1e-8, 1e-10, 1e-12, 1e-14, 1e-16, 1e-20, 0];
/** In 1 over mean times: the height. */
const high = 2_000;

/**
 * Transfer functions brought back to time: exact for every kind of body. Delays are taken out first, so that spikes and jumps
 * are exact and what is inverted is smooth.
 * @see src/numerics/inversion.ts
 */
export const laplace: TracerWay = {
  name: "laplace",
  trace: (plant, entry, horizon) => laplaceTracing(plant, entry, horizon),
};

/** The same, for those who want derivatives too. */
export function laplaceTracing(plant: Plant, entry: Entry, horizon: number): LaplaceTracing {
  requireCarried(plant, "laplace");
  const fed = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const flow = isClosed(plant) ? plant.columns.inflow.reduce((most, q) => Math.max(most, q), 0) : fed;
  const unit = flow > 0 ? plant.volume.active / flow || 1 : 1;
  return new LaplaceTracing(plant, entry, horizon, unit);
}

/** Tracer put in at one place, in copies of the plant by the delay it has passed; more copies are made as curves need them. */
class LaplaceTracing implements Tracing {
  private readonly passing: readonly Passing[];
  private sorted: Passes;
  private level = 0;
  /** Integral over all time of what leaves a node; in a closed vessel, where it has none, over the unit of time at the mean level. */
  private readonly doses: Float64Array;

  constructor(
    private readonly plant: Plant,
    private readonly entry: Entry,
    private readonly horizon: number,
    private readonly unit: number,
  ) {
    this.passing = passings(plant, unit);
    this.sorted = this.sort();
    this.doses = new Float64Array(plant.nodes.length);
    if (isClosed(plant)) {
      this.doses.fill(unit / plant.volume.active);
      return;
    }
    for (const [node, level] of putIn(plant.columns.inflow, entry)) this.doses[node] += level;
    new SteadyEquations(plant).solve(this.doses);
  }

  get truncated(): boolean {
    return this.sorted.truncated;
  }

  passagesAt(node: number): { delay: number; direct: number }[] {
    return this.sorted.copies.flatMap(({ delay, direct, smooth }) =>
      direct[node] > 0 || smooth[node] > 0 ? [{ delay, direct: direct[node] }] : [],
    );
  }

  see(drive: Drive, looks: readonly NodeLook[]): { seen: Seen[]; stopped: string | undefined } {
    return this.curves(
      drive,
      looks.map(({ node, times, lag = 0, integral = true }) => ({ node, times, lag, integral })),
    );
  }

  balance(drive: Drive, until: number): Balance {
    const { outlets } = this.plant;
    const times = Float64Array.of(until);
    const { seen } = this.curves(drive, [
      ...outlets.map(({ node }) => ({ node, lag: 0, times, integral: true })),
      { node: undefined, lag: 0, times, integral: false },
    ]);
    const left = outlets.reduce((sum, { flow }, i) => sum + flow * seen[i].integral[0], 0);
    const inside = seen[outlets.length].value[0];
    const injected = driveAt(drive, until).total;
    const recovered = left + inside;
    return { injected, left, inside, recovered, closure: injected > 0 ? Math.abs(injected - recovered) / injected : 0 };
  }

  private sort(): Passes {
    return passes(this.plant, this.passing, this.entry, this.horizon, roughness[this.level], {
      re: 2 / this.unit,
      im: high / this.unit,
    });
  }

  private curves(drive: Drive, curves: readonly Curve[]): { seen: Seen[]; stopped: string | undefined } {
    const { seen, stopped } = this.moved(drive, curves, []);
    return { seen, stopped };
  }

  /**
   * Curves and their derivatives along directions.
   * @returns a direction without a derivative has `undefined` in its place
   */
  moved(drive: Drive, curves: readonly Curve[], moves: readonly CurveMoves[]): MovedSeen {
    const start = (): Seen[] =>
      curves.map(({ times }) => ({ value: new Float64Array(times.length), integral: new Float64Array(times.length) }));
    const { plant, unit, passing, doses } = this;
    const put = putIn(plant.columns.inflow, this.entry);
    for (;;) {
      const { sorted } = this;
      const along = moves.map(({ plant: moved, delay, lag }): Along => {
        const slope = moved && passesSlope(plant, passing, sorted, put, moved);
        const gone = moved !== undefined && slope === undefined;
        return { slope, gone, delay, lag, sums: curves.map(({ times }) => new Float64Array(times.length)) };
      });
      const known = along.filter(({ gone }) => !gone);
      const parts = { plant, unit, passing, doses, sorted };
      const seen = start();
      if (sorted.rest.length > 0 && !addParts(parts, seen, drive, curves, true, known).settled) {
        this.level++;
        this.sorted = this.sort();
        continue;
      }
      const { settled, difference } = addParts(parts, seen, drive, curves, false, known);
      const slopes = along.map(({ gone, sums }) => (gone ? undefined : sums));
      const last = curves.reduce((t, { times }) => Math.max(t, times[times.length - 1] ?? 0), 0);
      if (settled) return { seen, slopes, stopped: cut(sorted.complete, last) };
      const off = difference.toExponential(1);
      return { seen, slopes, stopped: `the inversion did not settle: two node counts differ by ${off} of the peak` };
    }
  }
}

/** How curves move along one direction: the plant, and of each curve its line, s per unit of t. */
export interface CurveMoves {
  readonly plant: PlantSlope | undefined;
  readonly delay: readonly number[];
  readonly lag: readonly number[];
}

interface MovedSeen {
  readonly seen: Seen[];
  /** By direction and curve. */
  readonly slopes: readonly (readonly Float64Array[] | undefined)[];
  readonly stopped: string | undefined;
}
