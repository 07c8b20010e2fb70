import { concentrationsOf, type Reading, readingLabel, type Trial } from "../model/trial.js";
import type { Unit } from "../units/unit.js";
import type { Condensed } from "./condensed.js";

/** The points of one reading that a fit looks at: calibrated, without what is left out. */
export interface Block {
  /** Index of the trial, and of the reading in it. */
  readonly trial: number;
  readonly reading: number;
  /** `trial title/at`, made unique where a trial reads twice at one place. */
  readonly key: string;
  readonly declared: Reading;
  /** Where the block begins in the list of all observations. */
  readonly from: number;
  /** s on the trial's clock, and concentration in SI. */
  readonly time: Float64Array;
  readonly measured: Float64Array;
  /** Change of `measured` for one standard deviation of each thing that a calibration leaves open. */
  readonly doubts: readonly Float64Array[];
  /** Per point: -1 at or below the lower limit, 1 at or above the upper one, 0 seen; undefined where all are seen. */
  readonly censored: Int8Array | undefined;
  /** Of censored points in a problem that counts them: share of the information of a seen one. */
  readonly information?: Float64Array;
  /** Where few points stand for many: the points are then its own, `measured` is its target, and it knows the weights. */
  readonly condensed?: Condensed;
  /** Correlation time of errors that hang together by declaration, s; undefined where they do not. */
  readonly hangsTogether?: number;
  /** Readings of one dimension share a group, and with it one unknown variance. */
  readonly group: number;
  /** Unit of the group (that of its first reading): residuals are counted in it. */
  readonly unit: Unit;
  /** Baseline terms count from here (the first injection), s; drift is scaled by `span`, s, in the search. */
  readonly origin: number;
  readonly span: number;
}

/** All readings that have points, in the order of the trials. Drafts (no file) are passed over. */
export function blocksOf(trials: readonly Trial[]): Block[] {
  const blocks: Block[] = [];
  const groups: { dimension: string; unit: Unit }[] = [];
  const seen = new Map<string, number>();
  let from = 0;
  for (const [t, trial] of trials.entries()) {
    const starts = trial.injections.map((i) => i.start);
    const origin = starts.length > 0 ? Math.min(...starts) : (trial.contents?.begins ?? 0);
    for (const [r, declared] of trial.readings.entries()) {
      const points = keptPoints(declared);
      if (points.time.length === 0) continue;
      const dimension = declared.unit.dimension.join();
      let group = groups.findIndex((g) => g.dimension === dimension);
      if (group < 0) group = groups.push({ dimension, unit: declared.unit }) - 1;
      const plain = `${trial.title}/${readingLabel(declared)}`;
      const count = (seen.get(plain) ?? 0) + 1;
      seen.set(plain, count);
      const key = count === 1 ? plain : `${plain} (${count})`;
      const span = points.time.reduce((most, x) => Math.max(most, Math.abs(x - origin)), 0) || 1;
      const { correlated } = declared;
      blocks.push({
        ...(typeof correlated === "object" ? { hangsTogether: correlated.time } : {}),
        trial: t,
        reading: r,
        key,
        declared,
        from,
        ...points,
        group,
        unit: groups[group].unit,
        origin,
        span,
      });
      from += points.time.length;
    }
  }
  return blocks;
}

/** Points of a reading after calibration and `leave-out` (both ends included), finite ones only, in order of time. */
function keptPoints(reading: Reading): Pick<Block, "time" | "measured" | "doubts" | "censored"> {
  const { series, leaveOut } = reading;
  const concentration = concentrationsOf(reading);
  if (!series || !concentration)
    return { time: new Float64Array(0), measured: new Float64Array(0), doubts: [], censored: undefined };
  const leftOut = (t: number): boolean => leaveOut.some((s) => t >= s.from && t <= s.to);
  const all = new Int32Array(concentration.length);
  let count = 0;
  let ordered = true;
  for (let i = 0; i < all.length; i++) {
    const t = series.time[i];
    if (!Number.isFinite(concentration[i]) || (leaveOut.length > 0 && leftOut(t))) continue;
    if (count > 0 && t < series.time[all[count - 1]]) ordered = false;
    all[count++] = i;
  }
  const kept = all.subarray(0, count);
  if (!ordered) kept.sort((i, j) => series.time[i] - series.time[j] || i - j);
  const pick = (from: Float64Array): Float64Array => {
    const picked = new Float64Array(kept.length);
    for (let k = 0; k < kept.length; k++) picked[k] = from[kept[k]];
    return picked;
  };
  const flags = reading.censored && Int8Array.from(kept, (i) => reading.censored?.[i] ?? 0);
  const censored = flags?.some((f) => f !== 0) ? flags : undefined;
  return { time: pick(series.time), measured: pick(concentration), doubts: reading.doubts.map(pick), censored };
}

/** Number of points of all blocks. */
export const countOf = (blocks: readonly Block[]): number => blocks.reduce((n, b) => n + b.time.length, 0);

/**
 * The same blocks with at most about `most` points in all, evenly picked: enough to find where the optimum lies, not to say how
 * well it is known. The blocks themselves where there are no more.
 */
export function thinned(blocks: readonly Block[], most: number): readonly Block[] {
  const stride = Math.ceil(countOf(blocks) / most);
  if (stride <= 1) return blocks;
  let from = 0;
  return blocks.map((b) => {
    const kept = (_: number, i: number): boolean => i % stride === stride >> 1 || b.time.length < 2 * stride;
    const censored = b.censored?.filter(kept);
    const thin = { ...b, from, time: b.time.filter(kept), measured: b.measured.filter(kept), censored };
    from += thin.time.length;
    return thin;
  });
}
