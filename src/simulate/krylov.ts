import { ReducedFlow } from "../numerics/reduced-flow.js";
import { ShiftSpace } from "../numerics/shift-space.js";
import type { CellSystem } from "./cell-system.js";
import { type CellsResponse, cellsWay } from "./cells-tracing.js";
import type { TracerWay, WatchTracing } from "./tracing.js";

/** The shift, in units of one over the last time: larger ones are solved faster, smaller ones take fewer vectors. */
const shiftTimesSpan = 200;
/** Vectors at first, how many more at a time, and at most. */
const [first, more, most] = [40, 10, 160];
/** A curve that ten vectors more change less than this, beside its peak, is by then some tens of times nearer. */
const settled = 3e-10;

/**
 * Cells and joints alone, however far apart their rates: a few dozen solves with one shifted matrix make a small dense picture
 * of the whole that holds for all times. Memory: a vector per solve.
 */
export const krylov: TracerWay = cellsWay("krylov", response);

function response(
  { rows, start, volume, weight }: CellSystem,
  places: readonly number[],
  horizon: number,
  watch: WatchTracing = () => false,
): CellsResponse {
  const span = horizon > 0 ? horizon : 1;
  const space = new ShiftSpace(rows, shiftTimesSpan / span, start, weight, most + 1);
  const probes = [1 / 50, 1 / 20, 1 / 8, 1 / 4, 1 / 2, 1].map((part) => part * span);
  let before: number[] | undefined;
  for (let wanted = first; ; wanted += more) {
    let whole = false;
    let ended = false;
    while (space.order < wanted && !whole && !ended) {
      whole = !space.grow();
      ended = watch(space.order, most);
    }
    const picture = pictureOf(space, places, volume, span);
    const now = picture ? probes.flatMap((t) => picture.looks.map((look) => dot(picture.flow.at(t, 0), look))) : [];
    const stays = before !== undefined && picture !== undefined && same(before, now, picture.looks.length, volume);
    const exhausted = whole && space.failed;
    if (picture && (stays || whole || ended || wanted >= most)) {
      const good = stays || (whole && !exhausted);
      const why = ended
        ? "ended before it was done"
        : `the large network is not settled after ${space.order} vectors; the chebyshev engine may take long, but gets there`;
      return {
        series: { exponential: (t) => picture.flow.at(t, 0), integral: (_, order, t) => picture.flow.at(t, order) },
        sum: (look, c) => dot(c, picture.looks[look]),
        stopped: good && !ended ? undefined : why,
      };
    }
    if (!picture) return nothing;
    before = now;
  }
}

const nothing: CellsResponse = {
  series: { exponential: () => new Float64Array(0), integral: () => new Float64Array(0) },
  sum: () => Number.NaN,
  stopped: "the shifted equations of the large network have no solution",
};

/** The small system and what the looks, and the sum of all tracer after them, see of its unknowns. */
function pictureOf(space: ShiftSpace, places: readonly number[], volume: Float64Array, horizon: number) {
  const matrix = space.matrix();
  if (!matrix) return undefined;
  const looks = [...places.map((p) => space.look(p)), space.total(volume)];
  return { flow: new ReducedFlow(matrix, space.order, horizon), looks };
}

/** Have the values of each look changed by nothing that counts? */
function same(before: readonly number[], now: readonly number[], looks: number, volume: Float64Array): boolean {
  const level = 1 / volume.reduce((sum, v) => sum + v, 0);
  for (let look = 0; look < looks; look++) {
    let [peak, change] = [look === looks - 1 ? 1 : level, 0];
    for (let i = look; i < now.length; i += looks) {
      peak = Math.max(peak, Math.abs(now[i]));
      change = Math.max(change, Math.abs(now[i] - before[i]));
    }
    if (!(change < settled * peak)) return false;
  }
  return true;
}

function dot(x: Float64Array, y: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < x.length; i++) sum += x[i] * y[i];
  return sum;
}
