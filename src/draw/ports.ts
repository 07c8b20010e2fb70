import type { Ordered } from "./order.js";
import type { Trip } from "./trips.js";

/** Which way a stream takes between blocks. `over` and `under` are lanes above and below all it passes. */
export type Via = "gaps" | "over" | "under" | "side";

/** A trip with its way: seats visited (`gaps`), or the columns that its lane spans. */
export interface Routed {
  readonly trip: Trip;
  readonly via: Via;
  readonly way: readonly string[];
  /** Block where it leaves on the right side, and where it arrives (on the left; of `side` on the right). */
  readonly from: string;
  readonly to: string;
  /** Columns passed; a longer way runs further out. */
  readonly span: number;
  /** Of ways over or under as long as one another, the larger runs further out: what starts beyond the other. */
  readonly outer: number;
  /** Does it go against the flow? */
  readonly back: boolean;
}

/** Where streams meet a block's sides: px below its middle, by trip. */
export interface Ports {
  readonly left: ReadonlyMap<Trip, number>;
  readonly right: ReadonlyMap<Trip, number>;
  /** Half the height that the streams of the fuller side take. */
  readonly stack: number;
  /** Half the height of each side's streams. */
  readonly halfLeft: number;
  readonly halfRight: number;
}

const between = 2; // px

/** Decides how each trip runs, once columns are known. `ways` are those of the order's edges, forward trips first. */
export function routeTrips(trips: readonly Trip[], ordered: Ordered): readonly Routed[] {
  const column = (name: string): number => ordered.seats.get(name)!.column;
  let next = 0;
  return trips.map((trip): Routed => {
    const { from, to } = trip.stream;
    const distance = column(to) - column(from);
    const over = ordered.seats.get(from)!.rank;
    const plain = { trip, way: [] as readonly string[], from, to, span: Math.abs(distance), outer: -over, back: false };
    if (trip.role === "forward") return { ...plain, via: "gaps", way: ordered.ways[next++] };
    if (trip.role === "bypass") return { ...plain, via: "over", outer: over };
    if (trip.role === "recycle") return { ...plain, via: "under", back: true };
    if (distance === 0) return { ...plain, via: "side" };
    const ends = distance > 0 ? { from, to } : { from: to, to: from };
    if (plain.span === 1) return { ...plain, ...ends, via: "gaps", way: [ends.from, ends.to] };
    return { ...plain, ...ends, via: "under" };
  });
}

/** Outer lanes first; the order is the same for ports, tracks and lanes, so that they do not cross. */
export function outerFirst(routed: readonly Routed[]): readonly Routed[] {
  const at = new Map(routed.map((r, k) => [r, k]));
  return [...routed].sort((a, b) => b.span - a.span || b.outer - a.outer || at.get(b)! - at.get(a)!);
}

/** Stacks the streams of one block: lanes over it on top, onward streams by where they go, lanes under it below. */
export function portsOf(name: string, routed: readonly Routed[], ordered: Ordered, touching: boolean): Ports {
  const height = (id: string | undefined): number => (id === undefined ? 0 : (ordered.seats.get(id)?.height ?? 0));
  const stacked = (list: readonly (Routed | readonly Routed[])[]): readonly Trip[] => list.flat().map((r) => r.trip);
  const by = (list: readonly Routed[], toward: (r: Routed) => number): readonly Routed[] =>
    [...list].sort((a, b) => toward(a) - toward(b));
  const leaving = routed.filter((r) => r.from === name);
  const arriving = routed.filter((r) => r.to === name && r.via !== "side");
  const sideways = routed.filter((r) => r.via === "side" && (r.from === name || r.to === name));
  const of = (list: readonly Routed[], via: Via): readonly Routed[] => list.filter((r) => r.via === via);
  const right = stacked([
    outerFirst(of(leaving, "over")),
    by(of(leaving, "gaps"), (r) => height(r.way[1])),
    outerFirst(of(leaving, "under")),
    sideways,
  ]);
  const left = stacked([
    outerFirst(of(arriving, "over")),
    by(of(arriving, "gaps"), (r) => height(r.way[r.way.length - 2])),
    outerFirst(of(arriving, "under")),
  ]);
  const gap = touching ? 0 : between;
  const halfLeft = total(left, gap) / 2;
  const halfRight = total(right, gap) / 2;
  return {
    left: stack(left, gap),
    right: stack(right, gap),
    halfLeft,
    halfRight,
    stack: Math.max(halfLeft, halfRight),
  };
}

const total = (trips: readonly Trip[], gap: number): number =>
  trips.reduce((sum, t) => sum + t.width, 0) + Math.max(0, trips.length - 1) * gap;

function stack(trips: readonly Trip[], gap: number): Map<Trip, number> {
  let y = -total(trips, gap) / 2;
  return new Map(
    trips.map((t): [Trip, number] => {
      const middle = y + t.width / 2;
      y += t.width + gap;
      return [t, middle];
    }),
  );
}
