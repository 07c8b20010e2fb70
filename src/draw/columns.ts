import type { Block } from "./blocks.js";
import type { Ordered } from "./order.js";
import { outerFirst, type Routed } from "./ports.js";

/** The room between two columns: tracks for what turns up or down, and between them the onward streams. */
export interface Gap {
  /** Where onward streams may bend, x px. */
  readonly bendFrom: number;
  readonly bendTo: number;
  /** x of the upright piece of a lane that begins (right of a column) or ends here. */
  readonly starts: ReadonlyMap<Routed, number>;
  readonly ends: ReadonlyMap<Routed, number>;
}

export interface Columns {
  /** x of each column's middle, and its sides. */
  readonly middle: readonly number[];
  readonly left: readonly number[];
  readonly right: readonly number[];
  /** `gaps[c]` is the room to the left of column c; one more than there are columns. */
  readonly gaps: readonly Gap[];
}

const trackGap = 7;

/**
 * Places columns side by side from x = 0.
 * @param labelWidth width of a stream's label where it stands at its start, px
 * @param drop       how far streams rise or fall at most in the gap left of a column, px
 * @param margin     room after the first column and before the last, where the vessel's frame runs, px
 */
export function columnsOf(
  ordered: Ordered,
  blocks: ReadonlyMap<string, Block>,
  routed: readonly Routed[],
  labelWidth: (r: Routed) => number,
  drop: (gap: number) => number,
  margin: { readonly first: number; readonly last: number },
): Columns {
  const column = (name: string): number => ordered.seats.get(name)!.column;
  const count = ordered.columns.length;
  const outer = outerFirst(routed);
  const inner = outer.toReversed();
  const columns = { middle: [] as number[], left: [] as number[], right: [] as number[], gaps: [] as Gap[] };
  let x = 0;
  for (let c = 0; c <= count; c++) {
    const starting = (r: Routed): boolean => c > 0 && column(r.from) === c - 1;
    const ending = (r: Routed): boolean => c < count && column(r.to) === c;
    // outer lanes over go up first; outer lanes under turn last, so that neither crosses an inner one
    const starts = [
      ...outer.filter((r) => r.via === "over" && starting(r)),
      ...inner.filter((r) => r.via === "under" && starting(r)),
      ...inner.filter((r) => r.via === "side" && starting(r)),
    ];
    const ends = [
      ...outer.filter((r) => r.via === "under" && ending(r)),
      ...inner.filter((r) => r.via === "over" && ending(r)),
    ];
    if (c === 1) x += margin.first;
    const startAt = tracks(starts, x);
    const onward = routed.filter((r) => r.via === "gaps" && starting(r));
    const passes = c > 0 && c < count;
    const fall = drop(c);
    const label = Math.max(0, ...onward.map(labelWidth));
    const bendFrom = startAt.end + (passes && label > 0 ? label + 10 : 0);
    const bendTo = bendFrom + (passes ? (fall > 1 ? Math.max(30, Math.min(90, fall * 0.6)) : 14) : 0);
    const endAt = tracks(ends, bendTo);
    columns.gaps.push({ bendFrom, bendTo, starts: startAt.at, ends: endAt.at });
    x = endAt.end + (passes ? 4 : 0) + (c === count - 1 ? margin.last : 0);
    if (c === count) break;
    const own = ordered.columns[c].map((id) => blocks.get(id)?.reach);
    const left = Math.max(0, ...own.map((r) => r?.left ?? 0));
    const right = Math.max(0, ...own.map((r) => r?.right ?? 0));
    columns.left.push(x);
    columns.middle.push(x + left);
    columns.right.push(x + left + right);
    x += left + right;
  }
  return columns;
}

function tracks(list: readonly Routed[], from: number): { readonly at: Map<Routed, number>; readonly end: number } {
  const at = new Map<Routed, number>();
  let x = from;
  for (const r of list) {
    x += trackGap + r.trip.width / 2;
    at.set(r, x);
    x += r.trip.width / 2;
  }
  return { at, end: list.length > 0 ? x + trackGap : from };
}
