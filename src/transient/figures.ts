import type { Plant } from "../compile/plant.js";
import type { Duty, Reported } from "../model/duty.js";
import type { DutySettings } from "../reaction/conditions.js";
import { type Figure, type InAndOut, speciesFigure, temperatureUnit, tracerFigure } from "../reaction/figures.js";
import { one } from "../units/unit.js";
import { beyond, type Span } from "./beyond.js";
import { changes } from "./course-line.js";
import type { Transient } from "./transient.js";

/** A figure of a transient; of one over a limit, also when, and what left meanwhile. */
export interface TransientFigure extends Figure {
  readonly beyond?: Beyond;
  /** Of what relates to what is fed, in a run that is fed otherwise meanwhile: its ends among the run's times (s), each of what is fed then. */
  readonly range?: { readonly lowest: Extreme; readonly highest: Extreme };
}

interface Extreme {
  readonly value: number;
  /** Set where a removal is infinite. */
  readonly why: Figure["why"];
  readonly at: number;
}

export interface Beyond {
  /** s */
  readonly spans: readonly Span[];
  /** m3 that left meanwhile, and how much of the species it held (SI); no amount where the limit is one of the temperature. */
  readonly volume: number;
  readonly amount: number | undefined;
  /** Is it still so where the run ends? Then the time is that within the run. */
  readonly stillAtEnd: boolean;
}

/**
 * The values of a duty's report lines: times beyond a limit over the whole run, all others as they stand at its end. In a
 * closed vessel, conversion is of what was there at the start.
 */
export function transientFigures(
  plant: Plant,
  duty: Duty,
  run: Transient,
  settings: DutySettings = {},
): TransientFigure[] {
  const end = run.times[run.times.length - 1];
  return duty.report.map((line): TransientFigure => {
    if (line.what === "tracer-time") return tracerFigure(plant, line);
    if (line.what === "time-beyond") return beyondFigure(plant, duty, line, run, end, settings);
    if (line.what === "temperature") return temperatureFigure(duty, line, run, end, settings);
    if (run.stopped) return { name: line.text, value: Number.NaN, why: "undefined", unit: one };
    if (line.what !== "concentration" && noneHasLeft(plant, run, line, end)) {
      return { name: line.text, value: Number.NaN, why: "undefined", unit: one };
    }
    const at = (t: number): Figure => speciesFigure(duty, run.species, line, streamsAt(plant, run, line, t), settings);
    const isShare = line.what !== "concentration";
    return { ...at(end), ...(isShare && changes(duty) && plant.feeds.length > 0 ? rangeOf(run.times, at) : {}) };
  });
}

function rangeOf(times: ArrayLike<number>, figure: (t: number) => Figure): Pick<TransientFigure, "range"> {
  const seen = Array.from(times, (t): Extreme => {
    const { value, why } = figure(t);
    return { at: t, value, why };
  }).filter((e) => !Number.isNaN(e.value));
  if (seen.length === 0) return {};
  const lowest = seen.reduce((least, e) => (e.value < least.value ? e : least));
  const highest = seen.reduce((most, e) => (e.value > most.value ? e : most));
  return { range: { lowest, highest } };
}

/** Has nothing at all come to where a figure looks, because the first of what is fed is still on its way? */
function noneHasLeft(plant: Plant, run: Transient, line: Reported, end: number): boolean {
  const flow = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  if (run.start !== "contents" || !(end <= plant.volume.active / flow)) return false;
  const row = new Float64Array(run.species.length);
  const outlets = plant.outlets.filter((o) => o.flow > 0).map((o) => o.name);
  const places = line.at === undefined ? outlets : outlets.filter((name) => name === line.at);
  return (
    places.length > 0 &&
    places.every((name) => {
      run.look(name).integral(end, row);
      return row.every((x) => x === 0);
    })
  );
}

function temperatureFigure(duty: Duty, line: Reported, run: Transient, end: number, settings: DutySettings): Figure {
  const n = run.species.length;
  const row = new Float64Array(n + 1).fill(Number.NaN);
  const held = settings.temperature ?? duty.temperature?.of([]);
  if (held === undefined && !run.stopped) run.look(line.at ?? "").at(end, row, -1);
  const value = held ?? row[n];
  return { name: line.text, value, why: Number.isNaN(value) ? "undefined" : undefined, unit: temperatureUnit(duty) };
}

function beyondFigure(
  plant: Plant,
  duty: Duty,
  line: Reported,
  run: Transient,
  end: number,
  settings: DutySettings,
): TransientFigure {
  const { limit, at = "" } = line;
  const unit = plant.network.units.time;
  const unknown: TransientFigure = { name: line.text, value: Number.NaN, why: "undefined", unit };
  if (!limit || run.stopped) return unknown;
  const look = run.look(at);
  const n = run.species.length;
  const i = line.of === "" ? n : run.species.indexOf(line.of);
  const level = limit.value.of([]);
  const spans = stretchesBeyond();
  if (!spans) return unknown;
  const value = spans.reduce((sum, { from, to }) => sum + to - from, 0);
  const stillAtEnd = spans.length > 0 && spans[spans.length - 1].to >= end;
  const volume = spans.reduce((sum, { from, to }) => sum + look.volume(to) - look.volume(from), 0);
  return { name: line.text, value, why: undefined, unit, beyond: { spans, volume, amount: amount(spans), stillAtEnd } };

  function stretchesBeyond(): Span[] | undefined {
    if (!limit) return undefined;
    const held = settings.temperature ?? duty.temperature?.of([]);
    if (i < n || held === undefined) {
      const row = new Float64Array(n + 1).fill(Number.NaN);
      look.at(0, row);
      if (Number.isNaN(row[i])) return undefined;
      return beyond(look, n + 1, i, level, limit.side, end);
    }
    return (limit.side === "above" ? held > level : held < level) ? [{ from: 0, to: end }] : [];
  }

  function amount(within: readonly Span[]): number | undefined {
    if (i === n) return undefined;
    const row = new Float64Array(n);
    let sum = 0;
    for (const { from, to } of within) {
      look.left(to, row);
      sum += row[i];
      look.left(from, row);
      sum -= row[i];
    }
    return sum;
  }
}

/** What is fed and what leaves at a time; in a closed vessel, what there was at the start and is then. */
function streamsAt(plant: Plant, run: Transient, line: Reported, t: number): InAndOut {
  const n = run.species.length;
  const there = new Float64Array(n);
  if (line.at !== undefined) {
    const out = new Float64Array(n);
    run.look(line.at).at(t, out, -1);
    const fed = new Float64Array(n);
    if (plant.feeds.length === 0) run.look(line.at).at(0, fed);
    else {
      const flow = plant.feeds.reduce((sum, { name }) => sum + run.feedFlow(name, t), 0);
      run.fed(t, fed);
      for (let i = 0; i < n; i++) fed[i] /= flow;
    }
    return { fed, out };
  }
  if (plant.feeds.length === 0) return { fed: run.balance?.before ?? there, out: run.balance?.held ?? there };
  const [fed, out] = [new Float64Array(n), new Float64Array(n)];
  run.fed(t, fed);
  for (const { name, flow } of plant.outlets) {
    if (!(flow > 0)) continue;
    const look = run.look(name);
    look.at(t, there, -1);
    for (let i = 0; i < n; i++) out[i] += look.flow(t, -1) * there[i];
  }
  return { fed, out };
}
