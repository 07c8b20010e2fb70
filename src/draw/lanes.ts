import { levelled, type Piece, type Point, rounded, type Spine } from "../svg/spine.js";
import type { Columns } from "./columns.js";
import type { Ordered } from "./order.js";
import type { Ports, Routed } from "./ports.js";

/** Everything that ways are drawn from. y by seat; reach by seat. */
export interface Ground {
  readonly ordered: Ordered;
  readonly columns: Columns;
  readonly ports: ReadonlyMap<string, Ports>;
  readonly y: ReadonlyMap<string, number>;
  /** Half width of the body at a block's middle. */
  readonly halfWidth: (id: string) => number;
  readonly reach: (id: string) => { readonly above: number; readonly below: number };
}

const clear = 9; // px between a lane and what it passes
const labelRoom = 16; // px kept beside a lane for its label

/** The middle line of every stream. */
export function spinesOf(routed: readonly Routed[], ground: Ground): ReadonlyMap<Routed, Spine> {
  const spines = new Map<Routed, Spine>();
  for (const r of routed) {
    if (r.via === "gaps") spines.set(r, throughGaps(r, ground));
    if (r.via === "side") spines.set(r, bracket(r, ground));
  }
  const laneAt = lanes(routed, ground);
  for (const [r, y] of laneAt) spines.set(r, alongLane(r, y, ground));
  return spines;
}

function throughGaps({ trip, way }: Routed, ground: Ground): Spine {
  const { ordered, columns } = ground;
  const start = leave(way[0], trip, ground);
  const end = arrive(way[way.length - 1], trip, ground);
  const pieces: Piece[] = [];
  let here = start;
  for (const id of way.slice(1)) {
    const gap = columns.gaps[ordered.seats.get(id)!.column];
    const from = { x: gap.bendFrom, y: here.y };
    const last = id === way[way.length - 1];
    const to = { x: gap.bendTo, y: last ? end.y : ground.y.get(id)! };
    pieces.push({ to: from }, ...levelled(from, to));
    here = to;
  }
  pieces.push({ to: end });
  return { start, pieces };
}

/** Two bodies of one column: out on the right, along the track, and in from the right. */
function bracket(r: Routed, ground: Ground): Spine {
  const start = leave(r.from, r.trip, ground);
  const end = leave(r.to, r.trip, ground);
  const x = ground.columns.gaps[ground.ordered.seats.get(r.from)!.column + 1].starts.get(r)!;
  return rounded([start, { x, y: start.y }, { x, y: end.y }, end], bendRadius(r));
}

function alongLane(r: Routed, y: number, ground: Ground): Spine {
  const { seats } = ground.ordered;
  const start = leave(r.from, r.trip, ground);
  const end = arrive(r.to, r.trip, ground);
  const out = ground.columns.gaps[seats.get(r.from)!.column + 1].starts.get(r)!;
  const back = ground.columns.gaps[seats.get(r.to)!.column].ends.get(r)!;
  const corners = [start, { x: out, y: start.y }, { x: out, y }, { x: back, y }, { x: back, y: end.y }, end];
  return rounded(corners, bendRadius(r));
}

/**
 * Heights of the lanes. Short ones lie next to what they pass, longer ones outside. Slot 2c + 1 is column c, slot 2c
 * the gap to its left.
 */
function lanes(routed: readonly Routed[], ground: Ground): ReadonlyMap<Routed, number> {
  const { ordered, ports, y, reach } = ground;
  const slots = 2 * ordered.columns.length + 1;
  const top = new Float64Array(slots).fill(Number.POSITIVE_INFINITY);
  const bottom = new Float64Array(slots).fill(Number.NEGATIVE_INFINITY);
  const occupy = (slot: number, above: number, below: number): void => {
    top[slot] = Math.min(top[slot], above);
    bottom[slot] = Math.max(bottom[slot], below);
  };
  for (const { id, column } of ordered.seats.values()) {
    const middle = y.get(id)!;
    occupy(2 * column + 1, middle - reach(id).above, middle + reach(id).below);
    const p = ports.get(id);
    occupy(2 * column, middle - (p?.halfLeft ?? 0) - labelRoom, middle + (p?.halfLeft ?? 0) + labelRoom);
    occupy(2 * column + 2, middle - (p?.halfRight ?? 0) - labelRoom, middle + (p?.halfRight ?? 0) + labelRoom);
  }
  const at = new Map<Routed, number>();
  const column = (name: string): number => ordered.seats.get(name)!.column;
  const passing = routed
    .filter((r) => r.via === "over" || r.via === "under")
    .sort((a, b) => a.span - b.span || a.outer - b.outer);
  for (const r of passing) {
    const [first, last] = [2 * column(r.from) + 2, 2 * column(r.to)];
    const passed = Array.from({ length: Math.abs(last - first) + 1 }, (_, k) => Math.min(first, last) + k);
    const half = r.trip.width / 2;
    if (r.via === "over") {
      const lane = Math.min(...passed.map((s) => top[s])) - clear - half;
      for (const s of passed) top[s] = lane - half - labelRoom;
      at.set(r, lane);
    } else {
      const lane = Math.max(...passed.map((s) => bottom[s])) + clear + half;
      for (const s of passed) bottom[s] = lane + half + labelRoom;
      at.set(r, lane);
    }
  }
  return at;
}

const leave = (id: string, trip: Routed["trip"], { ordered, columns, ports, y, halfWidth }: Ground): Point => ({
  x: columns.middle[ordered.seats.get(id)!.column] + halfWidth(id),
  y: y.get(id)! + ports.get(id)!.right.get(trip)!,
});

const arrive = (id: string, trip: Routed["trip"], { ordered, columns, ports, y, halfWidth }: Ground): Point => ({
  x: columns.middle[ordered.seats.get(id)!.column] - halfWidth(id),
  y: y.get(id)! + ports.get(id)!.left.get(trip)!,
});

const bendRadius = (r: Routed): number => r.trip.width / 2 + 6;
