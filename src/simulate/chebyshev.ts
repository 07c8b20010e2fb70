import type { Plant } from "../compile/plant.js";
import { EllipseFlow } from "../numerics/ellipse-flow.js";
import { EllipseSeries } from "../numerics/ellipse-series.js";
import { type Ellipse, ellipseOf } from "../numerics/mixed-rows.js";
import { type CellSystem, cellSystem, type Detector } from "./cell-system.js";
import { driven } from "./driven.js";
import type { Entry } from "./entry.js";
import { type Drive, driveAt } from "./linear-system.js";
import type { Balance, Seen } from "./respond.js";
import type { NodeLook, TracerWay, Tracing, WatchTracing } from "./tracing.js";

/** A sum whose terms are so much larger than what they add up to has lost too many digits. */
const mostCancelled = 1e5;
/** How often the ellipse is made wider then. */
const mostTries = 4;

/**
 * Cells and joints alone, many of them: one series of vectors serves all times, of which only what is looked at is kept. Time
 * grows with the root of rate times span, and with the flow through; memory is that of the matrix and three vectors.
 */
export const chebyshev: TracerWay = {
  name: "chebyshev",
  trace: (plant, entry, horizon, watch) => new SeriesTracing(plant, entry, horizon, watch),
};

/** Passes over the matrix that the series takes to a time, by the ellipse. */
export const passesFor = (ellipse: Ellipse, horizon: number): number =>
  new EllipseSeries(ellipse).exponential(horizon).length;

class SeriesTracing implements Tracing {
  readonly truncated = false;
  private readonly system: CellSystem;
  private ellipse: Ellipse;
  private series: EllipseSeries;
  private flow: EllipseFlow | undefined;
  /** Unknowns that the flow looks at. */
  private places: readonly number[] = [];
  private stopped: string | undefined;
  private ended = false;
  /** Passes that the whole horizon takes at most. */
  private readonly most: number;

  constructor(
    private readonly plant: Plant,
    private readonly entry: Entry,
    private readonly horizon: number,
    private readonly watch: WatchTracing = () => false,
    private readonly detectors: readonly Detector[] = [],
  ) {
    this.system = cellSystem(plant, entry, detectors);
    this.ellipse = ellipseOf(this.system.rows, this.system.weight);
    this.series = new EllipseSeries(this.ellipse);
    this.most = passesFor(this.ellipse, horizon);
  }

  passagesAt(node: number): { delay: number; direct: number }[] {
    const direct = this.system.direct[this.system.place[node]];
    return direct > 0 ? [{ delay: 0, direct }] : [];
  }

  see(drive: Drive, looks: readonly NodeLook[]): { seen: Seen[]; stopped: string | undefined } {
    const lags = looks.flatMap(({ node, lag }) => (lag ? [{ node, lag }] : []));
    const other = lags.length > 0 ? this.detected(lags) : this;
    if (other !== this) return other.see(drive, looks);
    const { place, cells, direct: undispersed } = this.system;
    const nodes = [...looks.map((l) => l.node), ...this.plant.outlets.map((o) => o.node)];
    const places = [...new Set([...nodes.map((n) => place[n]), ...this.detectors.map((_, d) => cells + d)])];
    const { flow, stopped } = this.follow(places);
    const seen = looks.map(({ node, times, lag, integral = true }): Seen => {
      const at = lag ? cells + this.detectors.findIndex((d) => d.node === node && d.lag === lag) : place[node];
      const found = this.driven(flow, this.places.indexOf(at), drive, times, integral);
      const direct = lag ? 0 : undispersed[at];
      if (direct > 0) addDirect(found, direct, drive, times);
      return found;
    });
    return { seen, stopped };
  }

  balance(drive: Drive, until: number): Balance {
    const times = Float64Array.of(until);
    let left = 0;
    const { seen } = this.see(
      drive,
      this.plant.outlets.map(({ node }) => ({ node, times })),
    );
    this.plant.outlets.forEach((o, i) => {
      left += o.flow * seen[i].integral[0];
    });
    const { flow } = this.follow(this.places);
    const inside = this.driven(flow, this.places.length, drive, times, false).value[0];
    const injected = driveAt(drive, until).total;
    const recovered = left + inside;
    return { injected, left, inside, recovered, closure: injected > 0 ? Math.abs(injected - recovered) / injected : 0 };
  }

  /** The same with first-order detectors. */
  private detected(detectors: readonly Detector[]): SeriesTracing {
    const there = detectors.every((d) => this.detectors.some((e) => e.node === d.node && e.lag === d.lag));
    return there ? this : new SeriesTracing(this.plant, this.entry, this.horizon, this.watch, detectors);
  }

  private driven(flow: EllipseFlow, look: number, drive: Drive, times: Float64Array, integral: boolean): Seen {
    const { active } = this.plant.volume;
    const scale = look === this.places.length ? 1 : 1 / active;
    let asked = 0;
    const sum = (c: Float64Array, size: number): number => {
      if (flow.made > asked && !this.ended) this.ended = this.watch(flow.made, this.most);
      asked = flow.made;
      return this.ended ? Number.NaN : flow.sum(look, c, size);
    };
    return driven(this.series, sum, scale, drive, times, integral);
  }

  /** The series of vectors, at least at the given unknowns; the ellipse is made wider where digits were lost. */
  private follow(places: readonly number[]): { flow: EllipseFlow; stopped: string | undefined } {
    if (this.flow && places.every((p) => this.places.includes(p))) return { flow: this.flow, stopped: this.stopped };
    const { rows, start, volume, weight } = this.system;
    this.places = places;
    for (let left = mostTries; ; left--) {
      const flow = new EllipseFlow(rows, this.ellipse, start, places, volume, weight);
      this.flow = flow;
      this.stopped = this.lost(flow) ? "the series for the large network has lost its digits" : undefined;
      if (!this.stopped || left === 0) return { flow, stopped: this.stopped };
      const { half, height } = this.ellipse;
      this.ellipse = { half: half * 1.1, height: Math.min(half * 1.1, Math.max(2 * height, half / 20)) };
      this.series = new EllipseSeries(this.ellipse);
    }
  }

  /** Is a term somewhere so large beside the curve that only rounding is left of it? */
  private lost(flow: EllipseFlow): boolean {
    const scale = 1 / this.plant.volume.active;
    const largest = { term: 0 };
    let peak = scale;
    for (const part of [1 / 8, 1 / 4, 1 / 2, 1]) {
      const c = this.series.exponential(part * this.horizon);
      this.places.forEach((_, look) => {
        peak = Math.max(peak, Math.abs(flow.sum(look, c, scale, largest)));
      });
    }
    return !(largest.term < mostCancelled * peak);
  }
}

function addDirect(seen: Seen, direct: number, drive: Drive, times: Float64Array): void {
  times.forEach((t, i) => {
    const { rate, total } = driveAt(drive, t);
    seen.value[i] += direct * rate;
    seen.integral[i] += direct * total;
  });
}
