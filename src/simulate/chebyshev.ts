import { EllipseFlow } from "../numerics/ellipse-flow.js";
import { EllipseSeries } from "../numerics/ellipse-series.js";
import { type Ellipse, ellipseOf } from "../numerics/mixed-rows.js";
import type { CellSystem } from "./cell-system.js";
import { type CellsResponse, cellsWay } from "./cells-tracing.js";
import type { TracerWay, WatchTracing } from "./tracing.js";

/** A sum whose terms are so much larger than what they add up to has lost too many digits. */
const mostCancelled = 1e5;
/** How often the ellipse is made wider then. */
const mostTries = 4;

/**
 * Cells and joints alone: one series of vectors serves all times, of which only what is looked at is kept. Time grows with
 * the root of rate times span, and with the flow through; memory is that of the matrix and three vectors.
 */
export const chebyshev: TracerWay = cellsWay("chebyshev", response);

/** Passes over the matrix that the series takes at most to a time. */
export const passesFor = (ellipse: Ellipse, horizon: number): number =>
  new EllipseSeries(ellipse).exponential(horizon).length;

function response(
  system: CellSystem,
  places: readonly number[],
  horizon: number,
  watch: WatchTracing = () => false,
): CellsResponse {
  const { rows, start, volume, weight } = system;
  let ellipse = ellipseOf(rows, weight);
  for (let left = mostTries; ; left--) {
    const series = new EllipseSeries(ellipse);
    const most = series.exponential(horizon).length;
    const state = { ended: false };
    const flow = new EllipseFlow(rows, ellipse, start, places, volume, weight, (made) => {
      state.ended ||= watch(made, most);
      return state.ended;
    });
    const lost = isLost(flow, series, system, places, horizon);
    if (!lost || left === 0 || state.ended) {
      return {
        series,
        sum: (look, c, scale) => flow.sum(look, c, scale),
        get stopped() {
          if (state.ended) return "ended before it was done";
          return lost ? "the series for the large network has lost its digits" : undefined;
        },
      };
    }
    const half = ellipse.half * 1.1;
    ellipse = { half, height: Math.min(half, Math.max(2 * ellipse.height, half / 20)) };
  }
}

/** Is a term somewhere so large beside the curve that only rounding is left of it? */
function isLost(
  flow: EllipseFlow,
  series: EllipseSeries,
  { volume }: CellSystem,
  places: readonly number[],
  horizon: number,
): boolean {
  const scale = 1 / volume.reduce((sum, v) => sum + v, 0);
  const largest = { term: 0 };
  let peak = scale;
  for (const part of [1 / 8, 1 / 4, 1 / 2, 1]) {
    const c = series.exponential(part * horizon);
    places.forEach((_, look) => {
      peak = Math.max(peak, Math.abs(flow.sum(look, c, scale, largest)));
    });
  }
  return !(largest.term < mostCancelled * peak);
}
