import { checkTrial } from "../check/trial.js";
import { compile } from "../compile/compile.js";
import type { Plant } from "../compile/plant.js";
import { plantFollowing } from "../compile/sends.js";
import { type ReadingMoments, readMoments } from "../data/moments.js";
import { settingsOfDay } from "../fit/settings.js";
import type { Network } from "../model/network.js";
import type { Tracer, Trial } from "../model/trial.js";
import { parseNetwork } from "../parse/network.js";
import { parseTrial } from "../parse/trial.js";
import { collector } from "../problems/report.js";
import { tracerPlant } from "../simulate/tracer-plant.js";
import { hangsOnGuess, placesOf } from "../study/trial-facts.js";
import { inUnit } from "../units/unit.js";
import { ageCurvesCsv } from "./age-csv.js";
import type { Context } from "./context.js";
import type { Inputs } from "./inputs.js";
import { momentsResultJson } from "./json/moments.js";
import { flowThrough, knownOnDay } from "./known.js";
import { type Outcome, UsageError } from "./outcome.js";
import { requireTracer } from "./require-tracer.js";
import { momentsText } from "./text/moments.js";
import { curvesOn, type TextCurve } from "./text/plot.js";
import { blocks } from "./text/table.js";
import { vesselOf } from "./vessel.js";

export interface MomentsOptions {
  readonly vessel?: string;
  readonly output?: string;
}

/** `moments TRIAL`: the data alone; flow and volume come from the vessel where one is named. */
export function moments(file: string, { vessel, output }: MomentsOptions, { inputs, io }: Context): Outcome {
  if (output !== undefined && !/\.csv$/.test(output)) throw new UsageError("-o writes the curves to F.csv");
  const trial = inputs.document(file, parseTrial);
  requireTracer(trial, "`moments`");
  const network = vesselFor(trial, vessel, inputs);
  const { plant } = network ? compile(network, settingsOfDay(network, trial, {})) : { plant: undefined };
  const guessed = (of: (plant: Plant) => number): boolean =>
    network !== undefined && hangsOnGuess(network, settingsOfDay(network, trial, {}), of);
  const result = readMoments(
    trial,
    network
      ? {
          flowAt: (at) =>
            guessed((plant) => flowThrough(plant, at))
              ? undefined
              : knownOnDay(network, trial, (plant) => flowThrough(plant, at)),
          ...(guessed((plant) => plant.volume.total)
            ? { guessed: true }
            : { volume: knownOnDay(network, trial, (plant) => tracerPlant(plant, heldBack(trial)).volume.total) }),
          ...(guessed((plant) => vesselOf(plant).feed)
            ? {}
            : { throughflow: knownOnDay(network, trial, (plant) => vesselOf(plant).feed) }),
          ...(plant ? placesOf(plantFollowing(plant, trial.tracer?.follows?.of)) : {}),
          ...(trial.clock ? { timeUnit: network.units.time } : {}),
        }
      : {},
  );
  if (output !== undefined) io.write(output, ageCurvesCsv(result));
  return {
    status: 0,
    text: blocks(
      momentsText(trial.title, result),
      curvesOn(io, () => result.readings.flatMap(exitAge)),
    ),
    json: {
      ok: true,
      trial: trial.title,
      ...momentsResultJson(result),
      ...(output === undefined ? {} : { written: output }),
    },
  };
}

/** The curve as it was cleaned, of unit area. */
const exitAge = ({ at, curve, timeUnit }: ReadingMoments): TextCurve[] =>
  curve
    ? [
        {
          label: `E at ${at}`,
          x: curve.time.map((t) => inUnit(t, timeUnit)),
          xUnit: timeUnit.name,
          y: curve.E.map((v) => v * timeUnit.factor),
          yUnit: `1/${timeUnit.name}`,
        },
      ]
    : [];

/** What the tracer sees as volume: a loss makes it no larger. */
const heldBack = ({ tracer }: Trial): Tracer | undefined => tracer?.retained && { retained: tracer.retained };

function vesselFor(trial: Trial, named: string | undefined, inputs: Inputs): Network | undefined {
  const path = named ?? trial.vessel;
  if (path === undefined) return undefined;
  const network = inputs.document(path, parseNetwork);
  const { report, problems } = collector();
  checkTrial(network, trial, report);
  inputs.accept(problems);
  return network;
}
