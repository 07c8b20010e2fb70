import type { Settings } from "../compile/plant.js";
import type { AimAsked, Asked, InputRange, Study, SweepAsked } from "../model/study.js";
import { changes } from "../transient/course-line.js";
import { type AimResult, solveAim } from "./aim.js";
import { changedVessel } from "./changed.js";
import { countsOf, isCount } from "./counts.js";
import type { RivalDraws } from "./draws-of.js";
import { type Input, inputsOf } from "./inputs.js";
import type { Operation, Row } from "./operate.js";
import { operationOf } from "./operation.js";
import type { Answered, Ranked } from "./result.js";
import { rowsFor } from "./sources.js";
import { type Sweep, spaced, sweep, type Watch } from "./sweep.js";

/** Draws behind a sweep and an aim, taken at every point: all where they cost little, else some of them. */
const mostCheap = 50;
const someDraws = 60;
const fewerOf = ({ settings }: RivalDraws, { plant }: Ranked, { duty }: Asked): readonly Settings[] =>
  (plant?.columns.size ?? 0) <= mostCheap && !changes(duty) ? settings : settings.slice(0, someDraws);

/** A sweep that a study asks for, on one rival with its fitted values. */
export function sweepAsked(
  study: Study,
  ranked: Ranked,
  asked: SweepAsked,
  draws: RivalDraws,
  watch: Watch,
): Answered<SweepAsked, Sweep> {
  const head = { asked, rival: ranked.rival };
  const made = operationAsked(study, ranked, asked, fewerOf(draws, ranked, asked));
  if ("skipped" in made) return { ...head, skipped: made.skipped };
  const axes = [];
  for (const range of asked.over) {
    const between = rangeIn([...made.inputs, ...countsOf(made.operation)], range);
    if ("skipped" in between) return { ...head, skipped: between.skipped };
    const { input, from, to, log } = between;
    const values = spaced(from, to, range.points, log);
    axes.push({ input, log, values: isCount(input) ? [...new Set(values.map(Math.round))] : values });
  }
  return { ...head, found: sweep(made.operation, axes, made.rows, watch) };
}

/** An aim that a study sets, on one rival with its fitted values. */
export function aimAsked(
  study: Study,
  ranked: Ranked,
  asked: AimAsked,
  draws: RivalDraws,
  watch: Watch,
): Answered<AimAsked, AimResult> {
  const head = { asked, rival: ranked.rival };
  const made = operationAsked(study, ranked, asked, fewerOf(draws, ranked, asked));
  if ("skipped" in made) return { ...head, skipped: made.skipped };
  const range = rangeIn(made.inputs, asked.by);
  if ("skipped" in range) return { ...head, skipped: range.skipped };
  const { confidence } = asked;
  const options = { ...watch, rows: made.rows, ...(confidence === undefined ? {} : { confidence }) };
  return { ...head, found: solveAim(made.operation, asked.aim, range, options) };
}

/** The duty in the rival as fitted, or with the change laid over it. */
function operationAsked(
  study: Study,
  { rival, fit }: Ranked,
  { duty, change }: Asked,
  settings: readonly Settings[],
): { operation: Operation; inputs: readonly Input[]; rows: readonly Row[] } | { skipped: string } {
  const own = operationOf(rival.network, fit, study.trials, duty);
  if (!change) {
    return { operation: own, inputs: inputsOf(own), rows: rowsFor(own, settings, study.seed) };
  }
  const changed = changedVessel(rival, change, own.values);
  if ("skipped" in changed) return changed;
  const operation: Operation = { ...own, network: changed.network, values: changed.values };
  const rows = rowsFor(operation, changed.drawn(settings, study.seed), study.seed);
  return { operation, inputs: inputsOf(operation), rows };
}

/** The range of an input of this rival, SI. */
function rangeIn(
  inputs: readonly Input[],
  { name, between, log }: InputRange,
): { input: Input; from: number; to: number; log: boolean } | { skipped: string } {
  const input = inputs.find((i) => i.name === name);
  if (!input) return { skipped: `this network has no '${name}'` };
  const ends = between ? ([between[0].of([]), between[1].of([])] as const) : input.between;
  if (!ends) return { skipped: `nothing says between what '${name}' may move in this network` };
  const alike = between?.every((v) => v.dimension.every((d, i) => d === input.dimension[i])) ?? true;
  if (!alike) return { skipped: `the range of '${name}' is of another kind than its value` };
  const { limits } = input;
  if (limits && (ends[0] < limits[0] || ends[1] > limits[1])) {
    return { skipped: `the range of '${name}' goes beyond what it can be` };
  }
  return { input, from: ends[0], to: ends[1], log: log ?? (input.log && ends[0] > 0) };
}
