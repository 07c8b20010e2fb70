import type { Reading } from "../model/trial.js";
import { fTail } from "../numerics/distributions.js";
import { noiseAlong } from "./along.js";
import { countingVariance } from "./counting.js";
import { type Persistence, persistenceAlong, persistenceOf } from "./persistence.js";

/** One standard deviation of each point, and where it is known from. */
export interface Noise {
  readonly sd: Float64Array;
  readonly from: "declared" | "before the injection" | "scatter along the curve" | "roughness of the curve";
  readonly persistence: Persistence;
}

/**
 * The scatter of a reading: as declared; else that of at least 30 points before the injection; else that about a smooth curve
 * through what comes after the curve has come half way down, together with that of fewer points before the injection; else the roughness of
 * the curve, which is an upper bound where samples are sparse.
 * @param n how many of the points lie before the injection
 * @param judged noise of the same log, told before: not looked for again
 */
export function noiseOf(
  t: Float64Array,
  y: Float64Array,
  n: number,
  reading: Pick<Reading, "noise" | "calibration">,
  isStep = false,
  judged?: Noise,
): Noise {
  const silent = judged?.persistence ?? persistenceOf(t, y, n);
  const late = judged || silent.judged === "silence" ? undefined : noiseAlong(...latePart(t, y, n, isStep));
  const persistence = late ? persistenceAlong(t, late) : silent;
  const declared = reading.noise;
  if (declared) {
    const floor = declared.floor?.of([]) ?? 0;
    const relative = declared.relative ?? 0;
    const counts = countingVariance(reading);
    const sd = y.map((c) => Math.sqrt(floor ** 2 + (relative * c) ** 2 + (counts?.(c) ?? 0)));
    return { sd, from: "declared", persistence };
  }
  const told = (sd: number, from: Noise["from"]): Noise => ({
    sd: new Float64Array(y.length).fill(sd),
    from,
    persistence,
  });
  if (judged) return told(judged.sd[0], judged.from);
  const before = n >= 8 ? roughness(t.subarray(0, n), y.subarray(0, n)) : 0;
  if (silent.judged === "silence") return told(silent.from?.sd ?? before, "before the injection");
  if (late && (late.time > 0 || n < 8)) return told(late.sd, "scatter along the curve");
  if (!late)
    return n >= 8 ? told(before, "before the injection") : told(leastRoughness(t, y), "roughness of the curve");
  // Few silent points tell a scatter badly (its logarithm to 1 / sqrt(1.2 n)): those of the end count, too, where they scatter alike.
  if (Math.abs(Math.log(late.sd / before)) > 3 / Math.sqrt(1.2 * n)) return told(before, "before the injection");
  return told(Math.sqrt((n * before ** 2 + late.points * late.sd ** 2) / (n + late.points)), "before the injection");
}

/** From where the curve stays within half of its way to the end: fronts and spikes are behind. */
function latePart(t: Float64Array, y: Float64Array, n: number, isStep: boolean): [Float64Array, Float64Array] {
  const end = isStep && y.length > 0 ? median(y.slice(-Math.max(1, Math.floor((y.length - n) / 10)))) : 0;
  const off = (i: number): number => (isStep ? Math.abs(y[i] - end) : y[i]);
  let most = 0;
  for (let i = n; i < y.length; i++) most = Math.max(most, off(i));
  let from = y.length;
  while (from > n && off(from - 1) <= most / 2) from--;
  return [t.subarray(from), y.subarray(from)];
}

function leastRoughness(t: Float64Array, y: Float64Array): number {
  const whole = roughness(t, y);
  const third = Math.floor(t.length / 3);
  const late = third < 8 ? 0 : roughness(t.subarray(-third), y.subarray(-third));
  return late > 0 ? Math.min(whole, late) : whole;
}

/**
 * Standard deviation of independent noise on a smooth curve, from how far each point lies off the line between its
 * neighbours (T. Gasser, L. Sroka, C. Jennen-Steinmetz, Biometrika 73 (1986) 625-633). 0 for fewer than 3 points.
 */
export function roughness(t: Float64Array, y: Float64Array): number {
  let sum = 0;
  let count = 0;
  for (let i = 1; i + 1 < t.length; i++) {
    const width = t[i + 1] - t[i - 1];
    if (!(width > 0)) continue;
    const a = (t[i + 1] - t[i]) / width;
    const off = a * y[i - 1] + (1 - a) * y[i + 1] - y[i];
    sum += (off * off) / (a * a + (1 - a) * (1 - a) + 1);
    count++;
  }
  return count === 0 ? 0 : Math.sqrt(sum / count);
}

/** The chance that noise alone is taken for a curve by the means of its parts. */
const unlikely = 1e-3;

/**
 * True where nothing but noise is there: no more spread than noise has, no parts of the record that lie apart, and no point that stands
 * out. In long records a curve far below the scatter of one point shows in the first two.
 */
export function isNoise(t: Float64Array, y: Float64Array): boolean {
  const mean = y.reduce((sum, c) => sum + c, 0) / y.length;
  const spread = y.reduce((sum, c) => sum + (c - mean) ** 2, 0) / Math.max(1, y.length - 1);
  // The ratio of successive differences to variance (von Neumann 1941), here of second differences.
  // Of white noise its standard deviation is about sqrt(1.9 / n).
  const limit = Math.min(1.6, 1 + 3.1 * Math.sqrt(1.9 / y.length));
  if (spread > limit * roughness(t, y) ** 2 || partsDiffer(y)) return false;
  const middle = median(y);
  const robust = 1.4826 * median(y.map((c) => Math.abs(c - middle)));
  return y.every((c) => Math.abs(c - middle) <= 6 * robust);
}

/** Do the means of as many parts as points in each lie farther apart than those of noise do? One-way analysis of variance. */
function partsDiffer(y: Float64Array): boolean {
  const size = Math.floor(Math.sqrt(y.length));
  const parts = size > 0 ? Math.floor(y.length / size) : 0;
  if (size < 4) return false;
  let [within, sum, square] = [0, 0, 0];
  for (let p = 0; p < parts; p++) {
    const own = y.subarray(p * size, (p + 1) * size);
    const mean = own.reduce((s, c) => s + c, 0) / size;
    within += own.reduce((s, c) => s + (c - mean) ** 2, 0);
    sum += mean;
    square += mean * mean;
  }
  const between = size * (square - (sum * sum) / parts);
  const freedom = parts * (size - 1);
  return within > 0 && fTail(between / (parts - 1) / (within / freedom), parts - 1, freedom) < unlikely;
}

/** The middle value; the mean of the two middle ones where the count is even. */
export function median(values: Float64Array): number {
  const sorted = values.slice().sort();
  const half = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[half] : (sorted[half - 1] + sorted[half]) / 2;
}
