import { passTube } from "../reaction/tube.js";
import type { Path } from "./path.js";
import { type PieceBasis, sameTime } from "./pieces.js";
import { Sampled } from "./sampled.js";
import type { Scene } from "./scene.js";
import type { Signal } from "./signal.js";
import type { Start } from "./start.js";

/** Pieces of what enters that one piece of what leaves may stand for. */
const piecesAtOnce = 4;

/** Mixtures no further apart, scaled, are one. */
const alike = 1e-14;

/** What is asked of a tube. */
export interface TubeAsk {
  readonly scene: Scene;
  readonly node: number;
  readonly path: Path;
  readonly inlet: Signal;
  readonly start: Start;
  readonly basis: PieceBasis;
  readonly breaks: ArrayLike<number>;
  /** The longest piece, s: in a loop none may need what has not left yet. */
  readonly longest: (t: number) => number;
}

/**
 * What leaves a tube: the parcel that entered one delay ago, reacted on its way (method of characteristics), so that a front
 * that enters leaves as one. What was in it at the start leaves after it has reacted for as long as it was on its way since.
 */
export function tubeSignal({ scene, node, path, inlet, start, basis, breaks, longest }: TubeAsk): Sampled {
  const { width, course } = scene;
  const pass = scene.pass(node);
  const kinetics = scene.at(node).tube;
  const entered = new Float64Array(width);
  const last = {
    entered: new Float64Array(width).fill(Number.NaN),
    age: Number.NaN,
    left: new Float64Array(width),
    good: false,
  };
  const source = {
    unit: path.mean,
    breaks,
    longest: (t: number): number => {
      const then = path.entered(t, 1);
      const most = Math.min(longest(t), path.leaves(inlet.pace(then, piecesAtOnce), 1) - t);
      const rest = path.leaves(0, 1) - t;
      return then < 0 && rest > sameTime * t ? Math.min(most, rest) : most;
    },
    evaluate(t: number, side: number, out: Float64Array): boolean {
      let then = path.entered(t, 1);
      if (Math.abs(then) <= sameTime * t) then = side < 0 ? -1e-300 : 0;
      if (then < 0 && start.is === "contents") {
        out.set(start.holding(node));
        return !(t > 0) || passTube(kinetics, t, out);
      }
      inlet.read(then, side, entered, 0);
      // Much of what enters is constant: one parcel stands for all.
      const age = course.constant ? 0 : t - then;
      if (age === last.age && entered.every((x, i) => Math.abs(x - last.entered[i]) <= alike)) {
        out.set(last.left);
        return last.good;
      }
      last.entered.set(entered);
      last.age = age;
      last.left.set(entered);
      // Where flows change no two parcels need be equally long on their way.
      if (!course.constant) last.good = passTube(kinetics, age, last.left);
      else last.good = pass ? pass(last.left) : true;
      out.set(last.left);
      return last.good;
    },
  };
  const before = start.is === "steady" ? start.leaving(node) : start.holding(node);
  return new Sampled(basis, width, source, before);
}
