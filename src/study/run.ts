import { compile } from "../compile/compile.js";
import { readMoments } from "../data/moments.js";
import { explainsNothing } from "../fit/explains-nothing.js";
import { type FitOptions, fit } from "../fit/fit.js";
import { withKinetics } from "../fit/kinetics.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import type { Asked, Rival, Study } from "../model/study.js";
import { furtherTests } from "../plan/further.js";
import { sameCurves } from "../plan/same-curve.js";
import { acrossOf } from "./across.js";
import { aimAsked, sweepAsked } from "./asked.js";
import { changeOutcomes } from "./compare.js";
import { decisionsOf } from "./decide.js";
import { drawsOf, type RivalDraws } from "./draws-of.js";
import { fineCurves } from "./fine-curves.js";
import { nestedTests } from "./nested.js";
import { operationOf } from "./operation.js";
import { predictDuty } from "./predict.js";
import { standings, survives, untestedStanding } from "./rank.js";
import { regulatedOutcome } from "./regulated.js";
import { residenceOf } from "./residence.js";
import type { Answered, Ranked, StudyResult } from "./result.js";
import { type Sample, sampleOf } from "./sample.js";
import type { Watch } from "./sweep.js";
import { tellingTests } from "./tell-apart.js";
import { momentsFacts } from "./trial-facts.js";

export interface StudyOptions {
  /** Draws behind every interval; default 200. */
  readonly draws?: number;
  readonly cancelled?: () => boolean;
  readonly progress?: (what: StudyProgress) => void;
  /** Networks among which others of the same curve are looked for; default: none. */
  readonly library?: readonly Network[];
  /** Of each fit; default as the fit chooses. */
  readonly starts?: number;
}

export interface StudyProgress {
  /** "fitting", "predicting". */
  readonly stage: string;
  readonly what: string;
  /** 0 to 1 over the whole study. */
  readonly done: number;
}

const fewestDraws = 20;
const mostNested = 6;

/**
 * The whole job: fits every rival to all trials at once (without trials they stand as written), ranks them, predicts every duty for those that survive, and
 * compares the changes. Pure and deterministic for a given study; a cancelled run gives what is known so far.
 */
export function runStudy(study: Study, options: StudyOptions = {}): StudyResult {
  const cancelled = options.cancelled ?? (() => false);
  const tell = options.progress ?? (() => {});
  const count = Math.max(fewestDraws, options.draws ?? 200);
  const untested = study.trials.length === 0;
  const tracers = study.trials.filter((trial) => !trial.reacting);
  const readings = tracers.map((trial) => ({ trial, moments: readMoments(trial, momentsFacts(study, trial)) }));
  const fitted = study.rivals.map((rival, i): Omit<Ranked, "standing" | "survives"> => {
    tell({ stage: "fitting", what: rival.network.title, done: (0.8 * i) / study.rivals.length });
    return untested ? asWritten(rival) : fitRival(study, rival, options, cancelled);
  });
  const standing = untested ? fitted.map(() => untestedStanding(fitted.length)) : standings(fitted.map((f) => f.fit));
  const ranked = fitted
    .map(
      (f, i): Ranked => ({
        ...f,
        standing: standing[i],
        survives: untested
          ? f.plant !== undefined
          : f.fit !== undefined && survives(standing[i]) && !explainsNothing(f.fit),
      }),
    )
    .sort((a, b) => a.standing.difference - b.standing.difference);
  const ranking = withProfiles(study, ranked, options, cancelled);
  const survivors = ranking.filter((r) => r.survives && r.plant);
  const draws = new Map<Rival, RivalDraws>();
  for (const r of survivors)
    if (!cancelled())
      draws.set(r.rival, drawsOf(withKinetics(r.rival.network, study.trials), r.fit, count, study.seed));
  const alive = survivors.filter((r) => draws.has(r.rival));
  const samples = new Map<Rival, Map<Duty, Sample>>();
  const predictions = alive.flatMap((r, i) =>
    study.duties.flatMap((duty) => {
      tell({ stage: "predicting", what: duty.title, done: 0.8 + (0.1 * i) / alive.length });
      if (cancelled()) return [];
      const operation = operationOf(r.rival.network, r.fit, study.trials, duty);
      const sample = sampleOf(operation, draws.get(r.rival)?.settings ?? [], study.seed);
      samples.set(r.rival, (samples.get(r.rival) ?? new Map()).set(operation.duty, sample));
      return predictDuty(r, sample);
    }),
  );
  const changes = alive.flatMap((r, i) =>
    study.changes.flatMap((change) => {
      tell({ stage: "comparing", what: change.title, done: 0.9 + (0.05 * i) / alive.length });
      const present = samples.get(r.rival) ?? new Map<Duty, Sample>();
      return cancelled() ? [] : [changeOutcomes(r, change, present, draws.get(r.rival) as RivalDraws, study.seed)];
    }),
  );
  const asking = <A extends Asked, R>(
    what: string,
    list: readonly A[],
    answer: (study: Study, r: Ranked, asked: A, draws: RivalDraws, watch: Watch) => Answered<A, R>,
  ): Answered<A, R>[] =>
    alive.flatMap((r, i) =>
      list.flatMap((asked) => {
        tell({ stage: what, what: asked.duty.title, done: 0.95 + (0.05 * i) / alive.length });
        if (cancelled()) return [];
        return [answer(study, r, asked, draws.get(r.rival) as RivalDraws, { cancelled })];
      }),
    );
  const sweeps = asking("sweeping", study.sweeps, sweepAsked);
  const aims = asking("aiming", study.aims, aimAsked);
  const regulated = alive.flatMap((r) =>
    [...(samples.get(r.rival)?.values() ?? [])].flatMap((sample) => (cancelled() ? [] : regulatedOutcome(r, sample))),
  );
  const best = alive[0];
  const sameCurvesOfBest =
    best?.plant && !untested && !cancelled() ? sameCurves(best.plant, options.library ?? []) : [];
  const further = best?.fit && !cancelled() ? furtherTests(best.rival.network, study.trials, best.fit) : [];
  const vessel = study.rivals[0]?.network;
  return {
    study,
    ranking,
    readings,
    across: vessel && !cancelled() ? acrossOf(vessel, study.trials, study.seed) : undefined,
    predictions,
    changes,
    decisions: decisionsOf(study, alive, changes),
    telling: cancelled() ? [] : tellingTests(alive, study.trials, draws),
    regulated,
    sweeps,
    aims,
    nested: cancelled() ? [] : nestedTests(fittedRivals(ranking), study.trials, study.seed),
    sameCurves: sameCurvesOfBest,
    further,
    fine: best?.fit && !cancelled() ? fineCurves(best.rival.network, study.trials, best.fit) : new Map(),
    residence: best?.plant && !cancelled() ? residenceOf(best.plant, draws.get(best.rival)?.settings ?? []) : undefined,
    draws: Math.min(count, ...[...draws.values()].map((d) => d.settings.length)),
    stopped: cancelled() ? "cancelled" : undefined,
    converged: ranking.every((r) => (untested ? r.plant !== undefined : (r.fit?.converged ?? false))),
  };
}

/** Without a trial a network counts as it is written. */
function asWritten(rival: Rival): Omit<Ranked, "standing" | "survives"> {
  const { plant, problems } = compile(rival.network);
  return { rival, fit: undefined, problems, plant };
}

/** Profiles of the best rival's parameters: the same fit once more, since nothing else of it is asked of the others. */
function withProfiles(
  study: Study,
  ranking: readonly Ranked[],
  options: StudyOptions,
  cancelled: () => boolean,
): Ranked[] {
  const [best, ...others] = ranking;
  if (!best?.fit?.converged || best.fit.parameters.length === 0 || cancelled()) return [...ranking];
  const { fit: again } = fitRival(study, best.rival, options, cancelled, true);
  return [again && !again.stopped ? { ...best, fit: again } : best, ...others];
}

/** Those that may be compared: few enough that every pair is looked at. */
function fittedRivals(ranking: readonly Ranked[]) {
  return ranking
    .slice(0, mostNested)
    .flatMap(({ rival: { network }, fit }) => (fit?.converged ? [{ title: network.title, network, fit }] : []));
}

function fitRival(study: Study, rival: Rival, options: StudyOptions, cancelled: () => boolean, profile = false) {
  const fitOptions: FitOptions = {
    seed: study.seed,
    profile,
    asItStands: true,
    cancelled,
    ...(options.starts === undefined ? {} : { starts: options.starts }),
  };
  const outcome = fit(rival.network, study.trials, fitOptions);
  const plant = outcome.fit && compile(rival.network, outcome.fit.values).plant;
  return { rival, fit: outcome.fit, problems: outcome.problems, plant };
}
