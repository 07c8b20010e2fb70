import { type Halt, integrateByOdex, type StretchResult } from "./odex.js";
import type { StiffIntegrator, StiffResult, StiffStretch } from "./stiff.js";

/** Which method did the steps. */
export type MethodUsed = "nonstiff" | "stiff" | "both";

export interface SwitchedResult extends StretchResult {
  readonly jacobians: number;
  readonly factorizations: number;
}

/** Work, in evaluations of the right-hand side, before the other method is first given a try. */
const firstPatience = 1000;
/** Part of that work that a try may cost. */
const tryPart = 1 / 4;
/** Steps that an implicit method gets in a try, to find its length. */
const leastTried = 6;
/** How much faster the other must be to take over. */
const advantage = 2;

/** Remembers from stretch to stretch which method is at work and how long it has been trusted. */
export interface MethodRace {
  run(p: StiffStretch, y: Float64Array, output: (y: Float64Array) => void): SwitchedResult;
  /** Which methods made steps so far. */
  used(): MethodUsed;
}

/**
 * Chooses between an explicit and an implicit method by what they achieve: one works until its patience is up, then the
 * other goes on for a quarter of that work, and takes over if it gets on twice as fast. Patience doubles while the choice
 * holds, so that trying costs about a quarter (a first try may cost more: an implicit method needs its Jacobian, and some
 * steps to find their length), and a wrong choice is found out before it has doubled the work so far.
 * All is counted, nothing timed, so that a run is the same on every machine. Tries are no waste: their steps are kept.
 * @param stiff makes the implicit integrator, when it is first needed
 */
export function methodRace(stiff: () => StiffIntegrator): MethodRace {
  let implicit: StiffIntegrator | undefined;
  let current: Method = "nonstiff";
  let patience = firstPatience;
  let spent = 0;
  const steps = { nonstiff: 0, stiff: 0 };

  return {
    used: () => (steps.stiff === 0 ? "nonstiff" : steps.nonstiff === 0 ? "stiff" : "both"),
    run(p, y, output) {
      const total = { steps: 0, rejected: 0, rhs: 0, jacobians: 0, factorizations: 0 };
      let t = p.from;
      let outputs = Array.from(p.outputs);
      let stepHint: number | undefined;

      const go = (method: Method, budget: number): Leg => {
        const hint = method === "stiff" && stepHint !== undefined ? { firstStep: stepHint } : {};
        const stretch = {
          ...p,
          from: t,
          maxSteps: Math.max(1, p.maxSteps - total.steps),
          outputs,
          budget,
          leastSteps: leastTried,
          ...hint,
        };
        let reached = 0;
        const count = (state: Float64Array): void => {
          reached++;
          output(state);
        };
        let result: StretchResult & Partial<StiffResult>;
        if (method === "stiff") {
          implicit ??= stiff();
          result = implicit(stretch, y, count);
        } else result = integrateByOdex(stretch, y, count);
        outputs = outputs.slice(reached);
        const covered = Math.abs(result.t - t);
        const work = result.work ?? result.rhs;
        const step = result.nextStep ?? (result.steps > 0 ? covered / result.steps : undefined);
        stepHint = result.halt ? undefined : step;
        t = result.t;
        steps[method] += result.steps;
        total.steps += result.steps;
        total.rejected += result.rejected;
        total.rhs += result.rhs;
        total.jacobians += result.jacobians ?? 0;
        total.factorizations += result.factorizations ?? 0;
        // An implicit step may grow long after a start with short ones: its length now is what counts.
        const pace = Math.max(covered, method === "stiff" ? (step ?? 0) * result.steps : 0) / work;
        const { halt } = result;
        return { halt, over: !result.paused && (!halt || halt === "too-many-steps"), work, pace };
      };
      const finish = ({ halt }: Leg): SwitchedResult => ({ t, ...(halt && { halt }), ...total });

      for (;;) {
        const leg = go(current, patience - spent);
        spent += leg.work;
        if (leg.over) return finish(leg);
        const other: Method = current === "stiff" ? "nonstiff" : "stiff";
        const rival = go(other, patience * tryPart);
        if (rival.over || (rival.halt && leg.halt)) return finish(rival);
        if (!rival.halt && (leg.halt || rival.pace > advantage * leg.pace)) {
          current = other;
          patience = firstPatience;
        } else patience = Math.max(2 * patience, rival.work / tryPart);
        spent = 0;
      }
    },
  };
}

type Method = "nonstiff" | "stiff";

interface Leg {
  readonly halt: Halt | undefined;
  /** Nothing is left to do, or nothing may be done any more. */
  readonly over: boolean;
  readonly work: number;
  /** Time covered per work. */
  readonly pace: number;
}
