import type { Halt } from "../numerics/odex.js";
import { once } from "../numerics/once.js";
import { radauCoefficients } from "../numerics/radau-coefficients.js";
import { radauIntegrator, type StiffStretch } from "../numerics/stiff.js";
import type { Kick } from "./arrivals.js";
import { History, stepBasis } from "./history.js";
import type { Stage } from "./stage.js";

/** Relative tolerance of a step; the absolute one is this part of the concentration that the tracer would make if spread over all. */
const relative = 1e-9;
const absolute = 1e-12;
const stages = 7;
const stepping = once(() => {
  const basis = stepBasis(radauCoefficients(stages).c);
  const { places } = basis;
  /** Parts of a step at which it is tried. */
  const tried = [places[1] / 2, (places[3] + places[4]) / 2, (places[6] + places[7]) / 2];
  return { basis, tried };
});
/** What is remembered of loops may be off by as many tolerances. */
const remembered = 10;
/** Of the time: over so short a step, what comes out of a loop's delay is known only as well as `History` tells times apart. */
const finest = 1e-11;
/** First step, in mean times. */
const first = 1e-6;
const mostSteps = 1e7;

export interface StageAsk {
  /** s: mean time of the plant. */
  readonly unit: number;
  /** Concentration for measure. */
  readonly scale: number;
  /** How far to go, s. */
  readonly until: number;
  /** No step is longer, s: a part of the mean time, and of the shortest delay of a tube in a loop. */
  readonly step: number;
  /** How long a step from t may be at most, s. */
  readonly longest: (t: number) => number;
  readonly breaks: Float64Array;
  readonly kicks: readonly Kick[];
  /** Cells and blocks whose outflow is wanted. */
  readonly wanted: ReadonlySet<number>;
  /** When the whole state is wanted, s. */
  readonly snapshot: number;
  /** Starting states. */
  readonly start: Float64Array;
}

export interface StageAnswer {
  readonly history: History;
  /** Which signal of the history is what leaves a cell or block. */
  readonly signal: ReadonlyMap<number, number>;
  /** Which is what enters a looped delay. */
  readonly inlet: ReadonlyMap<number, number>;
  readonly snapshot: Float64Array | undefined;
  readonly steps: number;
  /** Where it stopped too soon, why, and the node that changed fastest there. */
  readonly stopped: { readonly t: number; readonly why: Halt; readonly node: number } | undefined;
}

/** Integrates a stage and remembers what others will ask of it; `history` is given out before it is full. */
export function runStage(stage: Stage, ask: StageAsk, given: (answer: StageAnswer) => void): StageAnswer {
  const { held, loops, mixing } = stage;
  const seen = held.filter((h) => ask.wanted.has(h.node));
  const signals = seen.length + loops.length;
  const signal = new Map(seen.map((h, i) => [h.node, i]));
  const inlet = new Map(loops.map((node, i) => [node, seen.length + i]));
  const { basis, tried } = stepping();
  const history = new History(basis, signals);
  const n = Math.max(1, stage.size);
  const firstLoop = mixing.flux.length - loops.length;
  const x = new Float64Array(n);
  x.set(ask.start);
  const there = new Float64Array(n);
  const places = basis.places.length;
  const rows = Array.from({ length: places }, () => new Float64Array(signals));
  const weights = new Float64Array(places);
  let [from, to] = [0, 0];
  const side = (t: number): number => (t - from < to - t ? 1 : -1);
  const tolerance = (c: number): number => relative * Math.abs(c) + absolute * ask.scale;

  const enteringLoop = (l: number, t: number): number => mixing.flux[firstLoop + l] / stage.through(loops[l], t);
  /** Signals at the places of a step. */
  const look = (t: number, h: number, y: Float64Array, z: readonly Float64Array[]): void => {
    for (let p = 0; p < places; p++) {
      const at = p === places - 1 ? t + h : t + h * basis.places[p];
      if (p === 0) there.set(y);
      else for (let i = 0; i < n; i++) there[i] = y[i] + z[p - 1][i];
      for (let s = 0; s < seen.length; s++) rows[p][s] = stage.outflow(seen[s], there);
      if (loops.length === 0) continue;
      stage.mix(at, there, p === 0 ? side(t) : p === places - 1 ? side(at) : side(at));
      for (let l = 0; l < loops.length; l++) rows[p][seen.length + l] = enteringLoop(l, at);
    }
  };
  const judge = (t: number, h: number, y: Float64Array, z: readonly Float64Array[]): number => {
    look(t, h, y, z);
    if (h < finest * t) return 0;
    let worst = 0;
    for (const part of tried) {
      basis.weigh(part, weights);
      there.set(y);
      for (let p = 1; p < places; p++) for (let i = 0; i < n; i++) there[i] += weights[p] * z[p - 1][i];
      const at = t + h * part;
      stage.mix(at, there, side(at));
      for (let l = 0; l < loops.length; l++) {
        let interpolated = 0;
        for (let p = 0; p < places; p++) interpolated += weights[p] * rows[p][seen.length + l];
        const true_ = enteringLoop(l, at);
        worst = Math.max(worst, Math.abs(true_ - interpolated) / (remembered * tolerance(true_)));
      }
    }
    return worst;
  };
  let snapshot: Float64Array | undefined;
  let lastStep = first * ask.unit;
  const answer = {
    history,
    signal,
    inlet,
    get snapshot() {
      return snapshot;
    },
    steps: 0,
    stopped: undefined as StageAnswer["stopped"],
  };
  given(answer);
  const accepted = (t: number, h: number, y: Float64Array, z: readonly Float64Array[]): boolean => {
    if (loops.length === 0) look(t, h, y, z);
    history.add(t, h, (p, row) => row.set(rows[p]));
    lastStep = h;
    if (snapshot === undefined && t + h >= ask.snapshot) {
      basis.weigh((ask.snapshot - t) / h, weights);
      snapshot = y.slice();
      for (let p = 1; p < places; p++) for (let i = 0; i < n; i++) snapshot[i] += weights[p] * z[p - 1][i];
    }
    return t + h >= ask.until;
  };
  const integrator = radauIntegrator(
    {
      size: n,
      rhs: (t, y, dy) => {
        if (stage.size === 0) dy[0] = 0;
        else stage.rhs(from + t, y, dy, side(from + t));
      },
      ...(stage.size > 0 && { pattern: stage.pattern, jacobian: (t, _, entries) => stage.jacobian(from + t, entries) }),
    },
    relative,
    stages,
  );
  const far = farEnd(ask);
  const stops = [...ask.breaks].filter((t) => t > 0 && t < far);
  stops.push(far);
  const slotOf = new Map(held.map((h, i) => [h.node, i]));
  // What cannot end is not begun.
  if (ask.until > mostSteps * ask.step) {
    answer.stopped = { t: 0, why: "too-many-steps", node: 0 };
    return answer;
  }
  let kick = 0;
  const near = (t: number): number => t + 1e-12 * t;
  for (const end of stops) {
    from = to;
    to = end;
    let kicked = from === 0;
    for (; kick < ask.kicks.length && ask.kicks[kick].time <= near(from); kick++) {
      stage.kick(slotOf.get(ask.kicks[kick].node) as number, ask.kicks[kick].amount, x);
      kicked = true;
    }
    const stretch: StiffStretch = {
      rhs: () => undefined,
      from: 0, // each stretch has its own clock: just after a pulse steps may be shorter than rounding of the time
      to: to - from,
      relative,
      absolute: absolute * ask.scale,
      maxSteps: mostSteps - answer.steps,
      outputs: [],
      longest: (t) => ask.longest(from + t),
      firstStep: kicked ? first * ask.unit : Math.max(first * ask.unit, lastStep / 8),
      ...(loops.length > 0 && { judge: (t, h, y, z) => judge(from + t, h, y, z) }),
      accepted: (t, h, y, z) => accepted(from + t, h, y, z),
    };
    const result = integrator(stretch, x, () => undefined);
    answer.steps += result.steps;
    if (result.halt) {
      answer.stopped = { t: from + result.t, why: result.halt, node: fastest(stage, from + result.t, x) };
      break;
    }
    if (result.paused) break;
  }
  return answer;
}

/** Which cell or block changes fastest, for its size. */
function fastest(stage: Stage, t: number, x: Float64Array): number {
  const dx = new Float64Array(x.length);
  if (stage.size > 0) stage.rhs(t, x, dx, 1);
  let [worst, most] = [0, -1];
  stage.held.forEach(({ offset, size }, n) => {
    for (let i = offset; i < offset + size; i++) {
      const rate = Number.isFinite(dx[i]) ? Math.abs(dx[i]) : Number.POSITIVE_INFINITY;
      if (rate > most) [worst, most] = [n, rate];
    }
  });
  return worst;
}

/** An end that does not hang on what is asked, unless that is very late. */
function farEnd({ until, unit }: StageAsk): number {
  let far = 1024 * unit;
  while (far < 2 * until) far *= 2;
  return far;
}
