import { checkTrial } from "../check/trial.js";
import type { Bootstrap } from "../fit/bootstrap.js";
import { fit } from "../fit/fit.js";
import { withKinetics } from "../fit/kinetics.js";
import type { Resampling } from "../fit/resample.js";
import type { Fit } from "../fit/result.js";
import { parseNetwork } from "../parse/network.js";
import { parseTrial } from "../parse/trial.js";
import { collector } from "../problems/report.js";
import { acrossOf } from "../study/across.js";
import { dimensions } from "../units/dimension.js";
import { formatNumber } from "../units/format.js";
import { inUnit, type Unit } from "../units/unit.js";
import type { Context } from "./context.js";
import { requireParameters } from "./free.js";
import type { ExitStatus } from "./io.js";
import { acrossJson } from "./json/across.js";
import { fitJson } from "./json/fit.js";
import { InputError, type Outcome, UsageError } from "./outcome.js";
import { progressOn } from "./progress.js";
import { acrossText } from "./text/across.js";
import { fitText } from "./text/fit.js";
import { curvesOn } from "./text/plot.js";
import { blocks } from "./text/table.js";
import { writeFit } from "./write-fit.js";

export interface FitOptions {
  readonly trial: readonly string[];
  readonly free?: readonly string[];
  readonly starts?: number;
  readonly seed: number;
  readonly strict?: true;
  readonly write?: true;
  readonly profile?: true;
  readonly further?: true;
  readonly bootstrap?: number;
  readonly resample?: Resampling;
  readonly resume?: string;
  readonly jobs?: number;
}

/** `fit NETWORK --trial FILE…`: the parameters of a network from all trials at once. */
export async function fitCommand(file: string, options: FitOptions, { inputs, io }: Context): Promise<Outcome> {
  for (const name of ["resume", "resample", "jobs"] as const) {
    if (options[name] !== undefined && options.bootstrap === undefined)
      throw new UsageError(`--${name} goes with --bootstrap`);
  }
  if (options.write && file === "-") throw new UsageError("--write needs a file to write to, not standard input");
  const network = inputs.document(file, parseNetwork);
  const trials = options.trial.map((path) => inputs.document(path, parseTrial));
  const { report, problems } = collector();
  for (const trial of trials) checkTrial(network, trial, report);
  inputs.accept(problems);
  if (options.free) requireParameters(withKinetics(network, trials), options.free);
  const progress = progressOn(io);
  const outcome = fit(network, trials, {
    ...(options.free ? { free: options.free } : {}),
    ...(options.starts === undefined ? {} : { starts: options.starts }),
    seed: options.seed,
    profile: options.profile === true,
    cancelled: io.cancelled,
    progress: ({ start, starts, best, evaluations }) =>
      progress.say(`fit: start ${start} of ${starts}, best ${formatNumber(best)}, ${evaluations} evaluations`),
  });
  progress.done();
  if (!outcome.fit) throw new InputError(outcome.problems);
  const { bootstrap: asked } = options;
  const sure = outcome.fit.converged && !outcome.fit.stopped && outcome.fit.parameters.length > 0;
  const refits =
    asked !== undefined && sure
      ? await (await import("./bootstrap.js")).bootstrap(
          network,
          trials,
          outcome.fit,
          { ...options, bootstrap: asked },
          { inputs, io },
        )
      : undefined;
  const cut = refits !== undefined && refits.done < refits.asked;
  const fitStatus = cut ? 130 : statusOf(outcome.fit, options.strict === true);
  const writing = options.write ? writeFit(file, network, trials, outcome.fit, fitStatus, io) : undefined;
  const status = fitStatus === 0 && writing?.failed ? 1 : fitStatus;
  const beyond =
    sure && (options.further || cannotBeTold(outcome.fit))
      ? (await import("./further.js")).beyondFit(network, trials, outcome.fit, options)
      : undefined;
  const across = sure ? acrossOf(network, trials, options.seed) : undefined;
  return {
    status,
    text: blocks(
      fitText(network.title, outcome.fit, refits),
      across && acrossText(across),
      pictureOf(outcome.fit, network.units.time, io),
      beyond?.text,
      writing?.text,
    ),
    json: {
      ok: status === 0,
      network: network.title,
      ...fitJson(outcome.fit, network.units.time, refits),
      ...(across ? { across: acrossJson(across, network.units.unitFor(dimensions.volume)) } : {}),
      ...beyond?.json,
      ...(writing ? { written: writing.written } : {}),
    },
    problems: [...outcome.problems, ...(writing?.problems ?? [])],
    notes: [...(cut ? [cutShort(refits)] : notesOf(outcome.fit, fitStatus)), ...(writing?.notes ?? [])],
  };
}

/** The fitted curve of every reading, where somebody looks. */
const pictureOf = ({ readings }: Fit, time: Unit, io: Context["io"]): string =>
  curvesOn(io, () =>
    readings.map((r) => ({
      label: `fitted, ${r.key}`,
      x: r.time.map((t) => inUnit(t - r.time[0], time)),
      xUnit: time.name,
      y: r.fitted.map((v) => inUnit(v, r.unit)),
      yUnit: r.unit.name,
    })),
  );

const cutShort = ({ done, asked }: Bootstrap): string =>
  `backmix: interrupted after ${done} of ${asked} refits; with --resume FILE a bootstrap can be gone on with`;

/** A parameter that the data leave open: without a standard error, or part of a combination that they cannot tell. */
const cannotBeTold = (fit: Fit): boolean =>
  fit.parameters.some((p) => p.standardError === undefined) ||
  fit.findings.some((f) => f.code === "cannot-tell" || f.code === "wide-interval");

function statusOf(fit: Fit, strict: boolean): ExitStatus {
  if (fit.stopped) return 130;
  if (!fit.converged) return 3;
  return strict && (fit.parameters.some((p) => p.atBound) || cannotBeTold(fit)) ? 1 : 0;
}

function notesOf(fit: Fit, status: ExitStatus): string[] {
  if (fit.stopped) return ["backmix: interrupted; these are the best values found so far"];
  if (!fit.converged) return ["backmix: the fit did not converge; these are the best values found"];
  return status === 1 ? ["backmix: --strict: a parameter ended at a bound or cannot be told"] : [];
}
