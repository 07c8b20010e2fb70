import type { Halt } from "../numerics/odex.js";
import { radauIntegrator, type StiffStretch } from "../numerics/stiff.js";
import { type PieceBasis, Pieces } from "./pieces.js";
import type { Stage } from "./stage.js";

/** How finely a stage is integrated. */
export interface Fineness {
  /** Relative tolerance of a step, and the absolute one in scaled concentrations. */
  readonly relative: number;
  readonly absolute: number;
  readonly maxSteps: number;
}

export interface StageAsk extends Fineness {
  readonly basis: PieceBasis;
  /** s */
  readonly until: number;
  /** Times at which what enters jumps or kinks, ascending. */
  readonly breaks: ArrayLike<number>;
  /** Numbers of the bodies whose outflow others ask for. */
  readonly wanted: readonly number[];
  readonly start: Float64Array;
  /** How long a step from t may be, s. */
  readonly longest: (t: number) => number;
  /** Whether what reaction makes is to be counted. */
  readonly counted: boolean;
}

/** The run of a stage; the outflows are there to be read while it goes on. */
export interface StageRun {
  readonly outflow: ReadonlyMap<number, Pieces>;
  /** How far it has come, s. */
  readonly at: number;
  /** The state then. */
  readonly state: Float64Array;
  /** What reaction has made by then, scaled concentration times m3, by component. */
  readonly made: Float64Array;
  readonly steps: number;
  readonly stopped: { readonly t: number; readonly why: Halt; readonly body: number } | undefined;
}

/** @param before what left each wanted body before, in their order */
export function stageRun(
  stage: Stage,
  ask: StageAsk,
  before: readonly Float64Array[],
  width: number,
): StageRun & { go(): void } {
  const { basis, wanted } = ask;
  const outflow = new Map(wanted.map((body, k) => [body, new Pieces(basis, width, before[k])]));
  const x = ask.start.slice();
  const there = new Float64Array(stage.size);
  const made = new Float64Array(width);
  const places = basis.places.length;
  const rows = Array.from({ length: places }, () => new Float64Array(wanted.length * width));
  let [from, to] = [0, 0];
  const side = (t: number): number => (t - from < to - t ? 1 : -1);
  const run = { outflow, at: 0, state: x, made, steps: 0, stopped: undefined as StageRun["stopped"], go };
  return run;

  function go(): void {
    const integrator = radauIntegrator(
      {
        size: stage.size,
        rhs: (t, y, dy) => stage.rhs(from + t, y, dy, side(from + t)),
        pattern: stage.pattern,
        jacobian: (t, y, entries) => stage.jacobian(from + t, y, entries),
      },
      ask.relative,
      basis.stages,
    );
    const stops = [...Array.from(ask.breaks).filter((t) => t > 0 && t < ask.until), ask.until];
    for (const end of stops) {
      from = to;
      to = end;
      if (!(to > from)) continue;
      const stretch: StiffStretch = {
        rhs: () => undefined,
        from: 0, // a clock of its own: just after a jump steps may be shorter than rounding of the time
        to: to - from,
        relative: ask.relative,
        absolute: ask.absolute,
        maxSteps: ask.maxSteps - run.steps,
        outputs: [],
        longest: (t) => ask.longest(from + t),
        accepted,
      };
      const result = integrator(stretch, x, () => undefined);
      run.steps += result.steps;
      if (result.halt) {
        run.at = from + result.t;
        run.stopped = { t: run.at, why: result.halt, body: fastest() };
        return;
      }
      run.at = to;
    }
  }

  function accepted(t: number, h: number, y: Float64Array, z: readonly Float64Array[]): boolean {
    for (let p = 0; p < places; p++) {
      const state = p === 0 ? y : moved(y, z[p - 1]);
      for (let k = 0; k < wanted.length; k++) stage.outflow(wanted[k], state, rows[p], k * width);
      // What reaction made is what the rates that the step was taken with changed, less what flows did. The rates themselves will
      // not do: where fast ones cancel, the last digits of a state move them by more than what they make.
      if (p > 0 && ask.counted) {
        const at = from + t + h * basis.places[p];
        stage.addNetFlow(at, state, side(at), -h * basis.whole[p], made);
      }
    }
    if (ask.counted) for (let b = 0; b < stage.held.length; b++) stage.addHeld(b, z[z.length - 1], made);
    for (let k = 0; k < wanted.length; k++) {
      outflow.get(wanted[k])?.add(from + t, h, (p, into, at) => {
        for (let i = 0; i < width; i++) into[at + i] = rows[p][k * width + i];
      });
    }
    run.at = from + t + h;
    return false;
  }

  function moved(y: Float64Array, z: Float64Array): Float64Array {
    for (let i = 0; i < there.length; i++) there[i] = y[i] + z[i];
    return there;
  }

  /** The body that changes fastest where it stopped. */
  function fastest(): number {
    const dx = new Float64Array(stage.size);
    stage.rhs(run.at, x, dx, 1);
    let [worst, most] = [0, -1];
    stage.held.forEach(({ first, states }, b) => {
      for (let i = first * width; i < (first + states) * width; i++) {
        const rate = Number.isFinite(dx[i]) ? Math.abs(dx[i]) : Number.POSITIVE_INFINITY;
        if (rate > most) [worst, most] = [b, rate];
      }
    });
    return worst;
  }
}
