import { Part, type Plant } from "../compile/plant.js";
import type { Contents, Injection, Trial } from "../model/trial.js";
import { RefusedError } from "../problems/refused.js";
import { problem } from "../problems/report.js";
import type { Span } from "../text/source.js";
import { isLevel } from "../units/basis.js";
import type { Entry } from "./entry.js";
import { constantRate, type Drive, instant } from "./linear-system.js";

/** Tracer that a trial puts in, all by one clock. */
export interface Put {
  readonly entry: Entry;
  /** s on the trial's clock. */
  readonly start: number;
  readonly drive: Drive;
  /** The rate that the vessel is in balance with before, into the same node. */
  readonly before: number;
  /** Undefined for an injection; of what was there at the start, when that was: before, all stands still. */
  readonly begins?: number;
  /** Beside the drive: a node that holds a level in what leaves it from the start on, and the amount that this stands for. */
  readonly still?: { readonly node: number; readonly level: number; readonly amount: number };
}

/**
 * All that a trial puts in: its injections, and what is in the vessel at the start.
 * @param plant  as the tracer sees it
 * @param liquid as the liquid does, for what enters with it; the same where the tracer is neither lost nor held back
 */
export function putsOf(plant: Plant, trial: Trial, liquid: Plant = plant): Put[] {
  const injections = trial.injections.map((injection): Put => {
    const entry = plant.entry.get(injection.at);
    if (entry === undefined) throw new RangeError(`no place '${injection.at}' in the network`);
    return { entry, start: injection.start, ...driveOf(liquid, injection, trial.tracer?.decay) };
  });
  return trial.contents ? [...contentPuts(plant, trial.contents), ...injections] : injections;
}

/**
 * The tracer rate of an injection from its start on, beside a rate `before` that the vessel is in balance with.
 * @param decay 1/s: what a measured inlet shows later is brought back to the start of the injection
 */
export function driveOf(plant: Plant, injection: Injection, decay = 0): { drive: Drive; before: number } {
  const { form, lasting } = injection;
  if (form.is === "pulse") {
    const amount = form.amount.of(plant.env);
    return { drive: lasting > 0 ? constantRate(amount / lasting, lasting) : instant(amount), before: 0 };
  }
  const node = plant.entry.get(injection.at) as number;
  const flow = plant.nodes[node].inflow;
  if (form.is === "step") {
    // A level is a concentration in what enters, or a dosing rate: the dimension tells.
    const perFlow = isLevel(form.level.dimension) ? flow : 1;
    const before = (form.from?.of(plant.env) ?? 0) * perFlow;
    return { drive: constantRate(form.level.of(plant.env) * perFlow - before, lasting || undefined), before };
  }
  return { drive: measuredDrive(injection, form, flow, decay), before: 0 };
}

/** The rate of an injection of one unit: of amount, of a level or rate, or of flow that brings a measured inlet. */
export function unitDrive(injection: Injection, decay = 0): Drive {
  const { form, lasting } = injection;
  if (form.is === "pulse") return lasting > 0 ? constantRate(1 / lasting, lasting) : instant(1);
  return form.is === "step" ? constantRate(1, lasting || undefined) : measuredDrive(injection, form, 1, decay);
}

function measuredDrive(
  { start }: Injection,
  { table, lag = 0 }: Extract<Injection["form"], { is: "signal" }>,
  flow: number,
  decay: number,
): Drive {
  const value = decay === 0 ? table.value : table.value.map((c, i) => c * Math.exp(decay * (table.time[i] - start)));
  return signalDrive(table.time, value, flow, start, lag);
}

/**
 * A measured inlet, straight between its points, nothing before the first and its last value after the last. Where a
 * detector with a lag saw it, what entered is the reading and lag times its slope: y' = (c - y) / lag, exact on each piece.
 */
function signalDrive(time: Float64Array, value: Float64Array, flow: number, start: number, lag: number): Drive {
  const n = time.length;
  const slope = new Float64Array(n);
  for (let i = 0; i + 1 < n; i++) {
    const span = time[i + 1] - time[i];
    slope[i] = span > 0 ? ((value[i + 1] - value[i]) / span) * flow : 0;
  }
  return { amount: 0, times: time.map((t) => t - start), level: value.map((c, i) => c * flow + lag * slope[i]), slope };
}

/**
 * What cells hold at the start is an amount put into all of them at once. What a tube holds is what entered it during the
 * space time before; none of it has left by then. What another body holds is what it would go on to send at that level,
 * less what it would make of entering liquid at that level: of a step, 1 - F is still from before.
 */
function contentPuts(plant: Plant, { at, begins, levels }: Contents): Put[] {
  const { size, part, volume, inflow } = plant.columns;
  const cells = new Map<number, number>();
  const others: Put[] = [];
  const byName = new Map(levels.map(({ of, level }) => [of, level.of(plant.env)]));
  for (let i = 0; i < size; i++) {
    const level = volume[i] > 0 ? levelIn(byName, plant.columns.nameOf(i)) : 0;
    if (level === 0) continue;
    if (part[i] === Part.Cell) cells.set(i, level * volume[i]);
    else if (part[i] === Part.Block) {
      requireBounded(plant, i, at);
      others.push(...blockPuts(plant, i, level, begins));
    } else if (inflow[i] > 0) {
      const span = volume[i] / inflow[i];
      const drive = constantRate(level * inflow[i], span);
      others.push({ entry: i, start: begins - span, drive, before: 0, begins });
    }
  }
  if (cells.size === 0) return others;
  const amount = [...cells.values()].reduce((sum, m) => sum + m, 0);
  for (const [cell, m] of cells) cells.set(cell, m / amount);
  return [{ entry: cells, start: begins, drive: instant(amount), before: 0, begins }, ...others];
}

/** A body whose tracer may stay beyond its ends and come back does not say what it holds. */
function requireBounded({ nodes }: Plant, node: number, at: Span): void {
  const { name, volume, inflow, block } = nodes[node];
  const spaceTime = volume / inflow;
  if (!block || Math.abs(block.series(inflow)[1] + spaceTime) <= 1e-9 * spaceTime) return;
  const what = `tracer at the start in '${name}', whose ends are open,`;
  throw new RefusedError([problem("not-yet", at, { what })]);
}

function blockPuts({ columns, from, to, flow }: Plant, node: number, level: number, begins: number): Put[] {
  const inflow = columns.inflow[node];
  const onward = new Map<number, number>();
  for (let k = 0; k < from.length; k++) {
    if (from[k] === node) onward.set(to[k], (onward.get(to[k]) ?? 0) + flow[k] / inflow);
  }
  const put = (entry: Entry, rate: number): Put => ({
    entry,
    start: begins,
    drive: constantRate(rate),
    before: 0,
    begins,
  });
  const still = { node, level, amount: level * columns.volume[node] };
  return [{ ...put(onward, level * inflow), still }, put(node, -level * inflow)];
}

/** The level of a node: that of the longest name that it lies under, else of `all`. */
function levelIn(levels: ReadonlyMap<string, number>, node: string): number {
  for (let name = node; name !== ""; name = name.slice(0, Math.max(0, name.lastIndexOf(".")))) {
    const level = levels.get(name);
    if (level !== undefined) return level;
  }
  return levels.get("all") ?? 0;
}
