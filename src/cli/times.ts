import { dimensions, sameDimension } from "../units/dimension.js";
import { parseUnit } from "../units/parse.js";
import { fromUnit, inUnit, type Unit } from "../units/unit.js";
import { UsageError } from "./outcome.js";

/** Times to compute, ascending, in s and as people asked for them. */
export interface Clock {
  readonly si: Float64Array;
  readonly shown: readonly number[];
  readonly unit: Unit;
}

export interface TimeOptions {
  readonly until?: string;
  readonly points?: number;
  readonly times?: string;
}

const defaultPoints = 400;
/** More would not fit into one answer. */
const mostPoints = 1_000_000;

/**
 * The times of `--times` (sorted), or a grid from 0 to `--until` of `--points` points.
 * @param unit  of time where neither says one
 * @param until the end of the grid, s, where it is not given
 */
export function clockFrom(options: TimeOptions, unit: Unit, until: () => number): Clock {
  if (options.times !== undefined) {
    if (options.until !== undefined || options.points !== undefined) {
      throw new UsageError("--times stands alone: it leaves nothing for --until and --points to say");
    }
    return listed(options.times);
  }
  const end = options.until === undefined ? undefined : single(options.until);
  const unitOf = end?.unit ?? unit;
  const last = end?.shown[0] ?? inUnit(until(), unit);
  if (!(last > 0)) throw new UsageError("--until must be later than 0");
  const points = options.points ?? defaultPoints;
  if (points > mostPoints) throw new UsageError(`--points: ${mostPoints} is the most`);
  const shown = Array.from({ length: points }, (_, i) => (i === points - 1 ? last : (last * i) / (points - 1)));
  return { si: Float64Array.from(shown, (t) => fromUnit(t, unitOf)), shown, unit: unitOf };
}

/** One time of an option, above 0: its unit is its own. */
export function oneTime(text: string, option: string, example: string): { readonly si: number; readonly unit: Unit } {
  const clock = single(text, option, example);
  if (!(clock.si[0] > 0)) throw new UsageError(`${option} must be longer than 0`);
  return { si: clock.si[0], unit: clock.unit };
}

function single(text: string, option = "--until", example = '"6 h"'): Clock {
  const clock = listed(text, option, example);
  if (clock.shown.length !== 1) throw new UsageError(`${option} takes one time, such as ${example}`);
  return clock;
}

const number = /^[-+−]?(\d+\.?\d*|\.\d+)([eE][-+]?\d+)?$/;

function listed(text: string, option = "--times", example = '"0.5, 1, 2.5 min"'): Clock {
  const parts = text.split(",").map((p) => p.trim());
  const last = /^(\S+)\s+(\S.*)$/.exec(parts[parts.length - 1]);
  const unit = last && parseUnit(last[2].trim());
  if (!last || !unit || "fault" in unit || !sameDimension(unit.dimension, dimensions.time)) {
    throw new UsageError(`${option} '${text}' needs a unit of time at its end, such as ${example}`);
  }
  parts[parts.length - 1] = last[1];
  const wrong = parts.find((p) => !number.test(p) || !Number.isFinite(Number(p.replace("−", "-"))));
  if (wrong !== undefined) throw new UsageError(`${option}: '${wrong}' is not a number; write ${example}`);
  const shown = parts.map((p) => Number(p.replace("−", "-"))).sort((a, b) => a - b);
  return { si: Float64Array.from(shown, (t) => fromUnit(t, unit)), shown, unit };
}
