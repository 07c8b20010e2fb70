import type { FlowPlan } from "../compile/flows.js";
import type { Plant, Settings } from "../compile/plant.js";
import { recordPlant } from "../compile/record.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { Value } from "../model/value.js";
import { exact } from "../simulate/exact.js";
import { recordTrial } from "../simulate/record-trial.js";
import { Replay } from "../simulate/replay.js";
import { engineFor } from "../simulate/trace.js";
import { hasSlopes } from "../simulate/trial-slopes.js";

/** Plants may change their structure as values do: so many recordings of one trial are kept. */
const mostKept = 3;

/** What recordings there are of a trial. */
interface Kept {
  readonly replays: Replay[];
  /** Recordings that were tried in vain. */
  failed: number;
}

/**
 * Trials of a network as recordings: made when a trial comes a second time (a fit moves facts of trials, and drops such trials
 * again), dropped with it.
 */
export class Replays {
  private readonly kept = new WeakMap<Trial, Kept>();

  constructor(
    private readonly network: Network,
    private readonly plan: FlowPlan,
  ) {}

  /** Recordings of a trial for values of just these names, the last one that served first. */
  of(trial: Trial): readonly Replay[] {
    return this.kept.get(trial)?.replays ?? [];
  }

  /** A recording held: it is asked first the next time. */
  served(trial: Trial, replay: Replay): void {
    const replays = this.kept.get(trial)?.replays;
    if (!replays || replays[0] === replay) return;
    replays.splice(replays.indexOf(replay), 1);
    replays.unshift(replay);
  }

  /**
   * What was compiled for values that no recording held for.
   * @param onDay  what the trial sets
   */
  met(
    trial: Trial,
    values: Settings,
    onDay: readonly (readonly [string, Value])[],
    plant: Plant,
    horizon: number,
  ): void {
    const kept = this.kept.get(trial);
    if (!kept) {
      this.kept.set(trial, { replays: [], failed: 0 });
      return;
    }
    if (kept.failed >= mostKept || !hasSlopes(plant, trial) || engineFor(plant, horizon) !== exact) return;
    const recorded = recordPlant(this.network, this.plan, plant, values, onDay);
    const replayed = recorded && recordTrial(recorded, trial);
    if (!replayed) {
      kept.failed++;
      return;
    }
    kept.replays.unshift(new Replay(replayed, trial.tracer?.decay ?? 0));
    if (kept.replays.length > mostKept) kept.replays.pop();
  }
}
