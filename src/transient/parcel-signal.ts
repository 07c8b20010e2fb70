import type { Stays } from "../compartments/stays.js";
import { Parcels, staysBeyond } from "./parcels.js";
import type { Pieces } from "./pieces.js";
import { Sampled } from "./sampled.js";
import type { TubeAsk } from "./tube-signal.js";

export interface ParcelSignalAsk extends TubeAsk {
  readonly stays: Stays;
  /** s */
  readonly horizon: number;
  /** Up to when what enters is known by now, s, if it is needed until then. */
  readonly known: (until: number) => number;
  /** Times at which what enters jumps or kinks, s. */
  readonly entries: ArrayLike<number>;
  /** What entered before, in balance; with `contents`, nothing is asked of it. */
  readonly entering: Float64Array;
}

/** What leaves a body of parcels that stay apart, and what it holds over its volume. */
export interface ParcelSignal {
  readonly signal: Sampled;
  /** Writes the mean mixture inside at t; false where it could not be followed. */
  inside(t: number, out: Float64Array): boolean;
}

/**
 * outlet(t) = integral of g(x) y(x; c_in(t - x)) dx + (1 - F(t)) y(t; c_0), g the share of stays, y(x; c) what becomes of a mixture c
 * at age x; where it was in balance before, what entered before 0 is integrated as such.
 * @see P.V. Danckwerts, Chem. Eng. Sci. 8 (1958) 93-102
 */
export function parcelSignal(ask: ParcelSignalAsk): ParcelSignal {
  const { scene, node, start, basis, breaks, stays, path, horizon, inlet, entering } = ask;
  const { width, course } = scene;
  const { mean } = path;
  const parcels = new Parcels({
    kinetics: scene.at(node).cell,
    stays,
    path,
    inlet,
    breaks: ask.entries,
    horizon,
    known: ask.known,
    basis,
  });
  const last = stays.marks[stays.marks.length - 1];
  const known: { old?: Pieces | undefined } = {};
  const old = (): Pieces | undefined => {
    if (!("old" in known)) {
      known.old =
        start.is === "steady"
          ? parcels.known(entering, mean * last + (course.constant ? 0 : horizon))
          : parcels.trajectory(start.holding(node), horizon);
    }
    return known.old;
  };
  const there = new Float64Array(width);
  /** Adds what was there at the start, of which `left` is still to be counted. */
  const addOld = (t: number, left: number, out: Float64Array): void => {
    if (!(left > 0)) return;
    old()?.read(t, 1, there, 0);
    for (let i = 0; i < width; i++) out[i] += left * Math.max(there[i], 0);
  };
  const before = start.is === "steady" ? start.leaving(node) : start.holding(node);
  // While flows are steady, what is new is a departure from what leaves anyway.
  const total = start.is === "steady" && course.constant ? before : undefined;
  const steady = start.is === "steady";
  /** Share that stays longer. */
  const share = (x: number): number => (x < stays.from ? 1 : stays.washout(x));
  const signal = new Sampled(
    basis,
    width,
    {
      unit: mean,
      blur: 10,
      breaks,
      longest: (t) => Math.min(ask.longest(t), Math.max(mean / 8, t / 4)),
      evaluate(t, _, out) {
        if (!old()) return false;
        if (!parcels.integral(t, stays.from, stays.density, total ? old() : undefined, out)) return false;
        if (total) for (let i = 0; i < width; i++) out[i] += total[i];
        else if (steady) parcels.addOlder(t, stays.from, stays.density, share(last), old() as Pieces, out);
        else addOld(t, share(path.displaced(0, t)), out);
        return true;
      },
    },
    before,
  );
  let held: Float64Array | undefined;
  return {
    signal,
    inside(t, out) {
      const then = old();
      if (!then || !parcels.integral(t, 0, share, total ? then : undefined, out)) return false;
      if (total) {
        held ??= parcels.weighed(then, share, staysBeyond(stays, last));
        for (let i = 0; i < width; i++) out[i] += held[i];
      } else if (steady) parcels.addOlder(t, 0, share, staysBeyond(stays, last), then, out);
      else addOld(t, staysBeyond(stays, path.displaced(0, t)), out);
      return true;
    },
  };
}
