import { checkTrial } from "../check/trial.js";
import { uncarried } from "../compile/carried.js";
import { compile } from "../compile/compile.js";
import { fit as fitNetwork } from "../fit/fit.js";
import { withKinetics } from "../fit/kinetics.js";
import type { Fit } from "../fit/result.js";
import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { parseNetwork } from "../parse/network.js";
import { parseTrial } from "../parse/trial.js";
import { collector } from "../problems/report.js";
import { drawsOf } from "../study/draws-of.js";
import { inputsOf } from "../study/inputs.js";
import type { Operation } from "../study/operate.js";
import { operationOf } from "../study/operation.js";
import { rowsFor, sourcesOf } from "../study/sources.js";
import { changes } from "../transient/course-line.js";
import { formatNumber } from "../units/format.js";
import type { Context } from "./context.js";
import { dutyFor } from "./duty-for.js";
import { InputError, type Outcome, UsageError } from "./outcome.js";
import { plantAt } from "./plant.js";
import { progressOn } from "./progress.js";
import { settingsBeside } from "./settings.js";
import { aimOutcome } from "./sweep-aim.js";
import type { Asked, SweepOptions } from "./sweep-options.js";
import { overOutcome } from "./sweep-over.js";

/** `sweep NETWORK --duty F`: the figures of a duty over one or two inputs, or the value of an input that meets an aim. */
export async function sweepCommand(file: string, options: SweepOptions, context: Context): Promise<Outcome> {
  if ((options.over === undefined) === (options.aim === undefined)) {
    throw new UsageError(
      'say what to sweep: --over "name=500 L..2000 L:16", or --aim "conversion of A = 95 %" --by name',
    );
  }
  if (options.over !== undefined) {
    for (const key of ["by", "between", "confidence"] as const) {
      if (options[key] !== undefined) throw new UsageError(`--${key} goes with --aim`);
    }
    if (options.over.length > 2) throw new UsageError("--over: one or two inputs; a third makes no picture");
  } else if (options.output !== undefined) throw new UsageError("-o goes with --over");
  const asked = ask(file, options, context);
  return options.over === undefined ? aimOutcome(asked, options, context) : overOutcome(asked, options, context);
}

function ask(file: string, options: SweepOptions, { inputs, io }: Context): Asked {
  const network = inputs.document(file, parseNetwork);
  const { set, duty } = settingsBeside(network, options.set, dutyFor(inputs, options.duty, network));
  const plant = compile(network, set).plant ?? plantAt(network, set);
  inputs.accept(uncarried(plant, "reaction"));
  const trials = (options.trial ?? []).map((path) => inputs.document(path, parseTrial));
  const fit = trials.length === 0 ? undefined : fitted(network, trials, options.seed, { inputs, io });
  const found = operationOf(network, fit, trials, duty);
  const operation: Operation = { ...found, values: { ...found.values, ...set } };
  const known = new Set(inputsOf(operation).map((i) => i.name));
  if (known.size === 0) throw new UsageError("neither network nor duty has an input by name");
  const many = options.draws ?? usualDraws(plant.columns.size, duty, options);
  const sources = many === 0 ? [] : sourcesOf(operation, fit);
  const draws = sources.length === 0 ? [] : drawsOf(withKinetics(network, trials), fit, many, options.seed).settings;
  // What --set says is known.
  const rows = rowsFor(operation, draws, options.seed).map((r) => ({ ...r, vessel: { ...r.vessel, ...set } }));
  return { operation, rows, carries: rows.length === 0 ? "" : carried(fit, sources.length, rows.length) };
}

/** More where they cost little: a share of the draws is known to some 1/sqrt(draws). */
function usualDraws(nodes: number, duty: Duty, { aim }: SweepOptions): number {
  const inTime = changes(duty) || duty.report.some((line) => line.what === "time-beyond");
  if (inTime || nodes > 50) return 100;
  return nodes > 10 || aim === undefined ? 400 : 1000;
}

function carried(fit: Fit | undefined, sources: number, rows: number): string {
  const declared = sources - (fit && fit.covariance.names.length > 0 ? 1 : 0);
  const what = [
    ...(fit ? ["what the fit leaves open"] : []),
    ...(declared > 0 ? [declared === 1 ? "the declared ±" : "every declared ±"] : []),
  ];
  return `${what.join(" and ")}, ${rows} draws`;
}

function fitted(network: Network, trials: readonly Trial[], seed: number, { inputs, io }: Context): Fit {
  const { report, problems } = collector();
  for (const trial of trials) checkTrial(network, trial, report);
  inputs.accept(problems);
  const progress = progressOn(io);
  const outcome = fitNetwork(network, trials, {
    seed,
    cancelled: io.cancelled,
    progress: ({ start, starts, best }) => progress.say(`fit: start ${start} of ${starts}, best ${formatNumber(best)}`),
  });
  progress.done();
  if (!outcome.fit) throw new InputError(outcome.problems);
  return outcome.fit;
}
