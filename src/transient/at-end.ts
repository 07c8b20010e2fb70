import type { Transient } from "./transient.js";

/** How a run ends: as it will stay, still on its way, or going up and down. */
export type AtEnd = "settled" | "changes" | "swings";

/** What the last tenth of a run may still move through, as a part of all that it moved through. */
const still = 0.01;
/** Ups and downs of the last half that count, as such a part. */
const swing = 0.05;
/** Turns between up and down in the last half from which on it swings. */
const turns = 3;

/**
 * Whether what leaves the outlets has come to rest at the end of a run, by the times at which it was looked at. In a closed vessel
 * nothing leaves: "settled", for its end is the one that was asked for.
 */
export function atEnd({ times, outlets, species, stopped }: Transient): AtEnd {
  if (stopped) return "settled";
  const n = species.length;
  const all = outlets
    .filter((o) => o.flow > 0)
    .flatMap(({ values, temperatures }) => [
      ...species.map((_, i) => Float64Array.from(times, (_t, k) => values[k * n + i])),
      ...(temperatures ? [Float64Array.from(temperatures)] : []),
    ]);
  const found = all.map((values) => endOf(times, values));
  return found.find((is) => is === "swings") ?? found.find((is) => is === "changes") ?? "settled";
}

function endOf(times: Float64Array, values: Float64Array): AtEnd {
  const until = times[times.length - 1];
  const range = spread(values, 0);
  const size = values.reduce((most, v) => Math.max(most, Math.abs(v)), 0);
  // What moves by rounding alone rests.
  if (!(range > 1e-6 * size)) return "settled";
  const from = (share: number): number => times.findIndex((t) => t >= share * until);
  if (spread(values, from(0.9)) <= still * range) return "settled";
  return turnsOf(values.subarray(from(0.5)), swing * range) >= turns ? "swings" : "changes";
}

function spread(values: Float64Array, from: number): number {
  let [low, high] = [Infinity, -Infinity];
  for (let k = from; k < values.length; k++) {
    low = Math.min(low, values[k]);
    high = Math.max(high, values[k]);
  }
  return high - low;
}

/** How often a curve turns after having gone at least `least` one way. */
function turnsOf(values: Float64Array, least: number): number {
  let [low, high, way, count] = [values[0], values[0], 0, 0];
  for (const v of values) {
    low = Math.min(low, v);
    high = Math.max(high, v);
    const next = v - low > least && way <= 0 ? 1 : high - v > least && way >= 0 ? -1 : 0;
    if (next === 0) continue;
    if (way !== 0) count++;
    way = next;
    [low, high] = [v, v];
  }
  return count;
}
