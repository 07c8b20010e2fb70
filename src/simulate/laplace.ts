import { requireCarried } from "../compile/carried.js";
import type { Plant } from "../compile/plant.js";
import { isClosed } from "../model/network.js";
import { invert, type Wanted } from "../numerics/inversion.js";
import { SteadyEquations } from "../transfer/steady-equations.js";
import type { Entry } from "./entry.js";
import { type Passing, passings } from "./laplace-gain.js";
import { type Passes, passes } from "./laplace-passes.js";
import { type Channel, transformsOf } from "./laplace-transforms.js";
import { type Drive, driveAt } from "./linear-system.js";
import { putIn } from "./moments.js";
import type { Balance, Seen } from "./respond.js";
import type { NodeLook, TracerWay, Tracing } from "./tracing.js";

/** Copies taken out of a loop before its rest is tried in one piece; then four times as many, and so on. */
const firstBudget = 1;
/** Nodes per window in such a trial, and nodes times copies. */
const trialNodes = 6_000;
const trialWork = 1_500_000;
/** The same where there is no other way. */
const mostNodes = 400_000;
const mostWork = 3_000_000;
/** In mean times: what is asked at the very moment of a jump is the value this soon after it. */
const soon = 4 ** -50;

/**
 * Transfer functions brought back to time: exact for every kind of body. Delays are taken out first, so that spikes and jumps
 * are exact and what is inverted is smooth.
 * @see src/numerics/inversion.ts
 */
export const laplace: TracerWay = {
  name: "laplace",
  trace(plant, entry, horizon) {
    requireCarried(plant, "laplace");
    const fed = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
    const flow = isClosed(plant) ? plant.columns.inflow.reduce((most, q) => Math.max(most, q), 0) : fed;
    const unit = flow > 0 ? plant.volume.active / flow || 1 : 1;
    return new LaplaceTracing(plant, entry, horizon, unit);
  },
};

/** One curve: what leaves a node (seen with a lag), or all that is held. */
interface Curve {
  readonly node: number | undefined;
  readonly lag: number;
  readonly times: Float64Array;
  readonly integral: boolean;
}

class LaplaceTracing implements Tracing {
  private readonly passing: readonly Passing[];
  private sorted: Passes;
  private budget = firstBudget;
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
    return passes(this.plant, this.passing, this.entry, this.horizon, this.budget);
  }

  private curves(drive: Drive, curves: readonly Curve[]): { seen: Seen[]; stopped: string | undefined } {
    const start = (): Seen[] =>
      curves.map(({ times }) => ({ value: new Float64Array(times.length), integral: new Float64Array(times.length) }));
    let seen = start();
    while (this.sorted.rest.length > 0 && !this.add(seen, drive, curves, true).settled) {
      this.budget = 4 * Math.max(this.budget, this.sorted.copies.length);
      this.sorted = this.sort();
      seen = start();
    }
    const { settled, difference } = this.add(seen, drive, curves, false);
    if (settled) return { seen, stopped: undefined };
    const off = difference.toExponential(1);
    return { seen, stopped: `the inversion did not settle: two node counts differ by ${off} of the peak` };
  }

  /** Adds what the copies make of a drive, or the rest behind them; the rest as a trial. */
  private add(seen: readonly Seen[], drive: Drive, curves: readonly Curve[], behind: boolean) {
    const { plant, unit } = this;
    const { copies, rest } = this.sorted;
    const impulses = impulsesOf(drive);
    const channels: Channel[] = [];
    const wanted: Wanted[] = [];
    const add: ((values: Float64Array) => void)[] = [];
    curves.forEach(({ node, lag, times, integral }, c) => {
      const dose = node === undefined ? unit : this.doses[node];
      const parts = behind ? [copies.length] : copies.keys();
      for (const copy of parts) {
        const { delay } = copies[copy] ?? rest[0];
        const direct = node === undefined ? 0 : (copies[copy]?.direct[node] ?? 0);
        const smooth =
          node === undefined || copy === copies.length || copies[copy].smooth[node] > 0 || (lag > 0 && direct > 0);
        for (const { power, shift, factor } of impulses) {
          for (const more of integral ? [0, 1] : [0]) {
            const order = power + more;
            const sum = more === 0 ? seen[c].value : seen[c].integral;
            const after = times.map((t) => t - delay - shift);
            if (lag === 0 && direct > 0 && order > 0) {
              after.forEach((u, i) => {
                if (u >= 0) sum[i] += factor * direct * (order === 1 ? 1 : order === 2 ? u : (u * u) / 2);
              });
            }
            const due = [...after.keys()].filter((i) => after[i] >= 0);
            if (!smooth || due.length === 0) continue;
            wanted.push({
              transform: channels.length,
              power: order,
              times: Float64Array.from(due, (i) => Math.max(after[i], soon * unit)),
              scale: (dose / unit) * unit ** order * (order === 0 ? 0.1 : 1),
              group: 8 * c + order,
            });
            add.push((values) => {
              due.forEach((i, k) => {
                sum[i] += factor * values[k];
              });
            });
          }
        }
        channels.push({ copy, node, lag });
      }
    });
    const transforms = transformsOf(plant, this.passing, this.sorted, channels);
    const most = behind
      ? Math.max(600, Math.min(trialNodes, trialWork / copies.length))
      : Math.max(6_000, Math.min(mostNodes, mostWork / (copies.length * plant.nodes.length)));
    const { values, difference, settled } = invert(transforms, wanted, unit, most, behind);
    values.forEach((v, w) => {
      add[w](v);
    });
    return { difference, settled };
  }
}

/** A drive as a sum of instant amounts (power 0), steps (1) and ramps (2), each from a time on. */
function impulsesOf({ amount, times, level, slope }: Drive): { power: number; shift: number; factor: number }[] {
  const impulses = amount === 0 ? [] : [{ power: 0, shift: 0, factor: amount }];
  let [lastLevel, lastSlope] = [0, 0];
  times.forEach((shift, i) => {
    if (i > 0) lastLevel += lastSlope * (shift - times[i - 1]);
    impulses.push({ power: 1, shift, factor: level[i] - lastLevel }, { power: 2, shift, factor: slope[i] - lastSlope });
    [lastLevel, lastSlope] = [level[i], slope[i]];
  });
  return impulses.filter(({ factor }) => factor !== 0);
}
