import type { Plant } from "../compile/plant.js";
import { type CellSystem, cellSystem, type Detector } from "./cell-system.js";
import { driven, type ResponseSeries } from "./driven.js";
import type { Entry } from "./entry.js";
import { type Drive, driveAt } from "./linear-system.js";
import type { Balance, Seen } from "./respond.js";
import type { NodeLook, TracerWay, Tracing, WatchTracing } from "./tracing.js";

/** The response of a system of cells to a unit put in all at once, as one method finds it. */
export interface CellsResponse {
  readonly series: ResponseSeries;
  /**
   * Of coefficients that the series gave, times what they multiply: the concentration at one of the places, or, under the
   * number after the last, all tracer that cells hold.
   * @param scale a part of 1e-11 of this does not count
   */
  sum(look: number, c: Float64Array, scale: number): number;
  /** Why it is not good, where it is not. */
  readonly stopped: string | undefined;
}

/** Asks a method for the response at some unknowns up to a time, s. */
export type CellsMethod = (
  system: CellSystem,
  places: readonly number[],
  horizon: number,
  watch: WatchTracing,
) => CellsResponse;

/** Cells and joints alone, many of them, by a method that follows all times and all places at once. */
export const cellsWay = (name: string, method: CellsMethod): TracerWay => ({
  name,
  trace: (plant, entry, horizon, watch = () => false) => new CellsTracing(method, plant, entry, horizon, watch, []),
});

class CellsTracing implements Tracing {
  readonly truncated = false;
  private readonly system: CellSystem;
  /** Unknowns that the response looks at. */
  private places: readonly number[] = [];
  private response: CellsResponse | undefined;

  constructor(
    private readonly method: CellsMethod,
    private readonly plant: Plant,
    private readonly entry: Entry,
    private readonly horizon: number,
    private readonly watch: WatchTracing,
    private readonly detectors: readonly Detector[],
  ) {
    this.system = cellSystem(plant, entry, detectors);
  }

  passagesAt(node: number): { delay: number; direct: number }[] {
    const direct = this.system.direct[this.system.place[node]];
    return direct > 0 ? [{ delay: 0, direct }] : [];
  }

  see(drive: Drive, looks: readonly NodeLook[]): { seen: Seen[]; stopped: string | undefined } {
    const lags = looks.flatMap(({ node, lag }) => (lag ? [{ node, lag }] : []));
    const other = this.detected(lags);
    if (other !== this) return other.see(drive, looks);
    const { place, cells, direct: undispersed } = this.system;
    const nodes = [...looks.map((l) => l.node), ...this.plant.outlets.map((o) => o.node)];
    const response = this.follow([...nodes.map((n) => place[n]), ...this.detectors.map((_, d) => cells + d)]);
    const seen = looks.map(({ node, times, lag, integral = true }): Seen => {
      const at = lag ? cells + this.detectors.findIndex((d) => d.node === node && d.lag === lag) : place[node];
      const found = this.driven(response, this.places.indexOf(at), drive, times, integral);
      const direct = lag ? 0 : undispersed[at];
      if (direct > 0) addDirect(found, direct, drive, times);
      return found;
    });
    return { seen, stopped: response.stopped };
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
    const response = this.follow(this.places);
    const inside = this.driven(response, this.places.length, drive, times, false).value[0];
    const injected = driveAt(drive, until).total;
    const recovered = left + inside;
    return { injected, left, inside, recovered, closure: injected > 0 ? Math.abs(injected - recovered) / injected : 0 };
  }

  /** The same with first-order detectors. */
  private detected(detectors: readonly Detector[]): CellsTracing {
    const there = detectors.every((d) => this.detectors.some((e) => e.node === d.node && e.lag === d.lag));
    if (there) return this;
    return new CellsTracing(this.method, this.plant, this.entry, this.horizon, this.watch, detectors);
  }

  private driven(response: CellsResponse, look: number, drive: Drive, times: Float64Array, integral: boolean): Seen {
    const scale = look === this.places.length ? 1 : 1 / this.plant.volume.active;
    return driven(response.series, (c, size) => response.sum(look, c, size), scale, drive, times, integral);
  }

  /** The response at the given unknowns at least. */
  private follow(places: readonly number[]): CellsResponse {
    if (this.response && places.every((p) => this.places.includes(p))) return this.response;
    this.places = [...new Set(places)];
    this.response = this.method(this.system, this.places, this.horizon, this.watch);
    return this.response;
  }
}

function addDirect(seen: Seen, direct: number, drive: Drive, times: Float64Array): void {
  times.forEach((t, i) => {
    const { rate, total } = driveAt(drive, t);
    seen.value[i] += direct * rate;
    seen.integral[i] += direct * total;
  });
}
