import { evaluateNames } from "../compile/evaluate.js";
import { coordinateOf } from "../fit/coordinates.js";
import type { ForwardModel } from "../fit/forward.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { lowDiscrepancy } from "../numerics/low-discrepancy.js";
import { enough, passageOf } from "./passage.js";

/** Where a reading lies for nine vessels of ten, the parameters anywhere within their bounds. SI, per time. */
export interface Band {
  readonly low: Float64Array;
  readonly high: Float64Array;
}

const vessels = 40;

/**
 * Curves of vessels drawn evenly within the bounds of the parameters, and how long tests of them would have to last.
 * @param step   the trial as a step, for the time that tracer needs; undefined where none can be told
 * @param longest s: what the file's own values need; horizons are a multiple of it
 */
export function bandOf(
  network: Network,
  model: ForwardModel,
  trial: Trial,
  times: readonly Float64Array[],
  origin: number,
  step: Trial | undefined,
  longest: number,
): { bands: readonly Band[] | undefined; stops: number | undefined } {
  const env = evaluateNames(network, {});
  const coordinates = network.names
    .filter((n) => n.role === "parameter" && n.between)
    .map((n) => coordinateOf(network, n, env));
  if (coordinates.length === 0 || coordinates.length > 40) return { bands: undefined, stops: undefined };
  const draw = lowDiscrepancy(coordinates.length, 1);
  const seen: (readonly Float64Array[])[] = [];
  const stops: number[] = [];
  const horizon = 4 * longest;
  const grid = Float64Array.from({ length: 801 }, (_, i) => (horizon * i) / 800);
  for (let tries = 0; seen.length < vessels && tries < 8 * vessels; tries++) {
    const u = draw();
    const values: Record<string, number> = {};
    coordinates.forEach((c, j) => {
      values[c.name] = c.toSi(c.draw[0] + u[j] * (c.draw[1] - c.draw[0]));
    });
    const curves = model.respond(
      trial,
      values,
      times.map((time) => ({ time: time.map((t) => t + origin) })),
    );
    if (!curves) continue;
    seen.push(curves);
    const passed =
      step &&
      model.respond(
        step,
        values,
        trial.readings.map(() => ({ time: grid })),
      );
    const ends = passed?.map((y) => {
      const passage = passageOf(grid, y);
      return passage ? enough(passage) : horizon;
    });
    if (ends) stops.push(Math.max(...ends));
  }
  if (seen.length < 10) return { bands: undefined, stops: undefined };
  const bands = times.map((time, i): Band => {
    const at = (share: number): Float64Array =>
      Float64Array.from(time, (_, k) =>
        quantile(
          seen.map((curves) => curves[i][k]),
          share,
        ),
      );
    return { low: at(0.05), high: at(0.95) };
  });
  return { bands, stops: stops.length > 0 ? quantile(stops, 0.9) : undefined };
}

function quantile(values: readonly number[], share: number): number {
  const sorted = [...values].sort((a, b) => a - b);
  const place = share * (sorted.length - 1);
  const below = Math.floor(place);
  const above = Math.min(sorted.length - 1, below + 1);
  return sorted[below] + (place - below) * (sorted[above] - sorted[below]);
}
