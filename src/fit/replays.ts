import type { FlowPlan } from "../compile/flows.js";
import type { Plant, Settings } from "../compile/plant.js";
import { recordPlant } from "../compile/record.js";
import type { OnDay } from "../compile/recorder.js";
import type { Network } from "../model/network.js";
import { factKey, type Trial } from "../model/trial.js";
import { isRecordable, recordTrial } from "../simulate/record-trial.js";
import { Replay } from "../simulate/replay.js";

/** So many sets of names that are set are kept apart for one trial. */
const mostKept = 8;

/** What recordings there are of a trial. */
interface Kept {
  readonly replays: Replay[];
  /** Is it known that there can be none? */
  never: boolean;
}

/**
 * Trials of a network as recordings, for those that come again and again. What a recording gives hangs on the names that are set
 * and on nothing else, not on when and where it was made: a fit's last digits must not hang on what was asked before.
 */
export class Replays {
  private readonly kept = new Map<Trial, Kept>();

  constructor(
    private readonly network: Network,
    private readonly plan: FlowPlan,
  ) {}

  /** Trials to record. */
  keep(trials: readonly Trial[]): void {
    for (const trial of trials) if (!this.kept.has(trial)) this.kept.set(trial, { replays: [], never: false });
  }

  /** Recordings of a trial, one for each set of names. */
  of(trial: Trial): readonly Replay[] {
    return this.kept.get(trial.moved?.of ?? trial)?.replays ?? [];
  }

  /**
   * Records a trial where it was compiled for values that no recording held for.
   * @returns is there a new recording?
   */
  record(moved: Trial, values: Settings, plant: Plant, horizon: number): boolean {
    const trial = moved.moved?.of ?? moved;
    const kept = this.kept.get(trial);
    const names = Object.keys(values);
    if (!kept || kept.never || kept.replays.some((r) => sameNames(r.inputs, names))) return false;
    if (!isRecordable(plant, trial, horizon)) {
      kept.never = true;
      return false;
    }
    const facts = new Map(factsOf(trial).map((key) => [key, moved.moved?.by.get(key) ?? 0]));
    const plantOn = recordPlant(this.network, this.plan, plant, values, setOnDay(trial), facts);
    const recorded = typeof plantOn === "string" ? plantOn : recordTrial(plantOn, trial);
    if (typeof recorded === "string") {
      kept.never = recorded === "never";
      return false;
    }
    kept.replays.push(new Replay(recorded, trial.tracer?.decay ?? 0));
    if (kept.replays.length > mostKept) kept.replays.shift();
    return true;
  }
}

/** Names that a trial sets, with their values made of the network's names. */
export const setOnDay = (trial: Trial): OnDay[] => [
  ...[...trial.flows].map(([feed, value]) => ({ name: `${feed}.flow`, value, fact: factKey.day(`${feed}.flow`) })),
  ...[...trial.with].map(([name, value]) => ({ name, value, fact: factKey.day(name) })),
];

/** What a trial declares with a `±` of its own. */
function factsOf(trial: Trial): string[] {
  const doses = trial.injections.map(({ form }) =>
    form.is === "pulse" ? form.amount : form.is === "step" ? form.level : undefined,
  );
  return [
    ...setOnDay(trial).flatMap(({ value, fact }) => (value.sd && fact ? [fact] : [])),
    ...doses.flatMap((value, i) => (value?.sd ? [factKey.dose(i)] : [])),
    ...trial.readings.flatMap(({ line }, r) =>
      (["delay", "lag"] as const).flatMap((part) => (line[part]?.sd ? [factKey.line(r, part)] : [])),
    ),
  ];
}

const sameNames = (a: readonly string[], b: readonly string[]): boolean =>
  a.length === b.length && a.every((name) => b.includes(name));
