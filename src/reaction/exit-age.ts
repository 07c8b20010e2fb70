import { evaluate, integralToEnd, interpolate, points } from "./chebyshev.js";

/** A share of what leaves that leaves all at once: through tubes alone. */
export interface Spike {
  /** s. */
  readonly time: number;
  readonly area: number;
}

/** The exit-age distribution of an outlet, scaled to area 1, in a form that can be asked at any time. */
export interface ExitAge {
  /** Smooth part, 1/s, at t >= 0. */
  density(t: number): number;
  /** Share that has not left by t; at a spike the value after it. */
  washout(t: number): number;
  /** Ascending; equal times merged. */
  readonly spikes: readonly Spike[];
  /** Times at which the smooth part may jump or kink, and where the next form begins; ascending, from 0. */
  readonly breaks: Float64Array;
  /** s: washout is at most 1e-13 from here on. */
  readonly horizon: number;
  /** Escape intensity E/W at long times, 1/s; infinite where E ends. */
  readonly intensityTail: number;
  /** Area before scaling; 1 for the whole outflow of one feed. */
  readonly area: number;
}

export interface ExitAgeSource {
  /** The smooth part at many times at once, 1/s. Limits from the right. */
  readonly density: (times: Float64Array) => ArrayLike<number>;
  readonly spikes?: readonly Spike[];
  /** Times at which the smooth part jumps or kinks, s. */
  readonly breaks?: readonly number[];
  /** s, up to where it is sampled; beyond, it falls exponentially. */
  readonly end: number;
}

const nodes = points(16);
const mostPanels = 2000;
const gone = 1e-13;

/** A stretch of time on which the density is one Chebyshev series. */
interface Panel {
  readonly from: number;
  readonly to: number;
  readonly series: Float64Array;
}

/**
 * An exit-age distribution from a function: sampled as finely as it takes to follow it to 1e-11 of its peak, piecewise by
 * Chebyshev series, so that integrals and the tail of the washout keep their digits.
 */
export function exitAge(source: ExitAgeSource): ExitAge {
  const spikes = merged(source.spikes ?? []);
  const inside = [...(source.breaks ?? []), ...spikes.map((s) => s.time)].filter((t) => t > 0 && t < source.end);
  const edges = [0, ...[...new Set(inside)].sort((a, b) => a - b), source.end];
  let open = edges.slice(1).map((to, i): [number, number] => [edges[i], to]);
  const panels: Panel[] = [];
  let peak = 0;
  while (open.length > 0) {
    const times = Float64Array.from(open.flatMap(([a, b]) => Array.from(nodes, (x) => a + ((x + 1) / 2) * (b - a))));
    const values = source.density(times);
    for (let i = 0; i < values.length; i++) peak = Math.max(peak, Math.abs(values[i]));
    const next: [number, number][] = [];
    open.forEach(([from, to], p) => {
      const n = nodes.length;
      const series = interpolate(Array.from({ length: n }, (_, j) => values[p * n + j]));
      const unresolved = Math.abs(series[n - 1]) + Math.abs(series[n - 2]);
      const full = panels.length + next.length + open.length > mostPanels || to - from < 1e-9 * source.end;
      if (unresolved <= 1e-12 * peak || full) panels.push({ from, to, series });
      else next.push([from, (from + to) / 2], [(from + to) / 2, to]);
    });
    open = next;
  }
  panels.sort((a, b) => a.from - b.from);
  return assemble(panels, spikes, tailOf(source));
}

/**
 * An exit-age distribution from a table, straight between its points and zero outside them but for the tail.
 * @param time s, ascending
 * @param density 1/s
 * @param intensityTail 1/s: rate at which the density falls beyond the last point; infinite where it ends there
 */
export function exitAgeOfTable(
  time: ArrayLike<number>,
  density: ArrayLike<number>,
  spikes: readonly Spike[] = [],
  intensityTail = Number.POSITIVE_INFINITY,
): ExitAge {
  const panels: Panel[] = [];
  const line = (from: number, to: number, a: number, b: number): void => {
    if (to > from) panels.push({ from, to, series: Float64Array.of((a + b) / 2, (b - a) / 2) });
  };
  line(0, time[0] ?? 0, 0, 0);
  const cuts = merged(spikes).map((s) => s.time);
  for (let i = 1; i < time.length; i++) {
    const at = (t: number): number => {
      return density[i - 1] + ((density[i] - density[i - 1]) * (t - time[i - 1])) / (time[i] - time[i - 1]);
    };
    const edges = [time[i - 1], ...cuts.filter((t) => t > time[i - 1] && t < time[i]), time[i]];
    for (let k = 1; k < edges.length; k++) line(edges[k - 1], edges[k], at(edges[k - 1]), at(edges[k]));
  }
  return assemble(panels, merged(spikes), intensityTail);
}

function merged(spikes: readonly Spike[]): Spike[] {
  const areas = new Map<number, number>();
  for (const { time, area } of spikes) areas.set(time, (areas.get(time) ?? 0) + area);
  return [...areas].map(([time, area]) => ({ time, area })).sort((a, b) => a.time - b.time);
}

/** Rate of decay at the end, from the last twentieth. */
function tailOf({ density, end, breaks = [], spikes = [] }: ExitAgeSource): number {
  const last = Math.max(0, ...breaks.filter((t) => t < end), ...spikes.map((s) => s.time).filter((t) => t < end));
  const before = end - Math.min(0.05 * end, 0.5 * (end - last));
  const [a, b] = Array.from(density(Float64Array.of(before, end)));
  const rate = Math.log(a / b) / (end - before);
  return b > 0 && rate > 0 ? rate : Number.POSITIVE_INFINITY;
}

/** Sums the washout from the end backwards: all terms positive, so that the tail keeps its digits. */
function assemble(panels: readonly Panel[], spikes: readonly Spike[], tail: number): ExitAge {
  const end = Math.max(panels.at(-1)?.to ?? 0, spikes.at(-1)?.time ?? 0);
  const lastDensity = Math.max(panels.at(-1)?.to === end ? evaluate((panels.at(-1) as Panel).series, 1) : 0, 0);
  const beyond = Number.isFinite(tail) ? lastDensity / tail : 0;
  const integrals = panels.map((p) => integralToEnd(p.series).map((c) => (c * (p.to - p.from)) / 2));
  const left = (t: number): number => spikes.reduce((sum, s) => (s.time > t ? sum + s.area : sum), 0);
  const after = new Float64Array(panels.length + 1);
  after[panels.length] = beyond;
  for (let k = panels.length - 1; k >= 0; k--) after[k] = after[k + 1] + evaluate(integrals[k], -1);
  const area = after[0] + left(-1);
  const place = (p: Panel, t: number): number => Math.min(1, Math.max(-1, (2 * t - p.from - p.to) / (p.to - p.from)));
  const washout = (t: number): number => {
    if (t >= end) return t === end && beyond === 0 ? 0 : (beyond * Math.exp(-tail * (t - end))) / area;
    const k = panelAt(panels, t);
    const smooth = k < 0 ? after[0] : after[k + 1] + evaluate(integrals[k], place(panels[k], t));
    return (smooth + left(t)) / area;
  };
  const rest = beyond / area;
  return {
    density(t) {
      if (t >= end) return Number.isFinite(tail) ? (lastDensity * Math.exp(-tail * (t - end))) / area : 0;
      const k = panelAt(panels, t);
      return k < 0 ? 0 : Math.max(evaluate(panels[k].series, place(panels[k], t)), 0) / area;
    },
    washout,
    spikes: spikes.map((s) => ({ time: s.time, area: s.area / area })),
    breaks: Float64Array.from(new Set([0, ...panels.map((p) => p.to), end])).sort(),
    horizon: rest > gone ? end + Math.log(rest / gone) / tail : end,
    intensityTail: beyond > 0 ? tail : Number.POSITIVE_INFINITY,
    area,
  };
}

/** The panel that holds t, by bisection; -1 outside all. */
function panelAt(panels: readonly Panel[], t: number): number {
  let [low, high] = [0, panels.length - 1];
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if (panels[middle].from <= t) low = middle;
    else high = middle - 1;
  }
  return panels.length > 0 && panels[low].from <= t && t <= panels[low].to ? low : -1;
}
