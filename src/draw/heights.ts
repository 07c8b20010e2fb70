import type { Ordered } from "./order.js";
import type { Ports, Routed } from "./ports.js";

/** How far a seat reaches up and down from its middle, px. */
export interface Reach {
  readonly above: number;
  readonly below: number;
}

const seatGap = 24; // px between neighbours of a column
const sweeps = 6;

/**
 * Heights of all seats (y of their middles, px, down): the heaviest stream into each runs straight where its column
 * leaves room. Sweeps left and right in turn; each column is the least-squares solution under its fixed order.
 */
export function heightsOf(
  ordered: Ordered,
  routed: readonly Routed[],
  ports: ReadonlyMap<string, Ports>,
  reach: (id: string) => Reach,
): Map<string, number> {
  const joints = routed
    .filter((r) => r.via === "gaps" && r.trip.role === "forward")
    .flatMap((r) =>
      r.way.slice(1).map(
        (to, k): Joint => ({
          from: r.way[k],
          to,
          weight: r.trip.width,
          // where the stream leaves and arrives, from the seats' middles
          out: ports.get(r.way[k])?.right.get(r.trip) ?? 0,
          in: ports.get(to)?.left.get(r.trip) ?? 0,
        }),
      ),
    );
  const y = new Map([...ordered.seats.values()].map((s) => [s.id, s.height * 60]));
  const settle = (column: readonly string[], from: "left" | "right"): void => {
    const wanted = column.map((id) => {
      const own = joints.filter((j) => (from === "left" ? j.to : j.from) === id);
      const heaviest = Math.max(0, ...own.map((j) => j.weight));
      const main = own.filter((j) => j.weight > 0.95 * heaviest); // equal branches: meet in the middle
      if (main.length === 0) return y.get(id)!;
      const at = main.map((j) => (from === "left" ? y.get(j.from)! + j.out - j.in : y.get(j.to)! + j.in - j.out));
      return at.reduce((sum, v) => sum + v, 0) / at.length;
    });
    const gaps = column.slice(1).map((id, k) => reach(column[k]).below + seatGap + reach(id).above);
    const weights = column.map((id) =>
      Math.max(0.1, ...joints.filter((j) => j.to === id || j.from === id).map((j) => j.weight)),
    );
    separated(wanted, weights, gaps).forEach((v, k) => {
      y.set(column[k], v);
    });
  };
  for (const column of ordered.columns) settle(column, "left");
  for (let sweep = 0; sweep < sweeps; sweep++) {
    for (const column of ordered.columns.toReversed().slice(1)) settle(column, "right");
    for (const column of ordered.columns.slice(1)) settle(column, "left");
  }
  tighten(ordered, joints, y, reach);
  return y;
}

interface Joint {
  readonly from: string;
  readonly to: string;
  readonly weight: number;
  readonly out: number;
  readonly in: number;
}

/**
 * Moves what hangs together by straight streams as one, toward the ends of its bent streams, as far as there is room:
 * takes out the slack that column-wise sweeps leave, without bending anything.
 */
function tighten(
  ordered: Ordered,
  joints: readonly Joint[],
  y: Map<string, number>,
  reach: (id: string) => Reach,
): void {
  const rise = (j: Joint): number => y.get(j.to)! + j.in - (y.get(j.from)! + j.out);
  const unit = new Map([...y.keys()].map((id) => [id, new Set([id])]));
  for (const j of joints) {
    if (Math.abs(rise(j)) > 0.01 || unit.get(j.from) === unit.get(j.to)) continue;
    const both = new Set([...unit.get(j.from)!, ...unit.get(j.to)!]);
    for (const id of both) unit.set(id, both);
  }
  // light units move first: they yield to heavy ones
  const weight = (u: Set<string>): number =>
    joints.reduce((sum, j) => sum + (u.has(j.from) || u.has(j.to) ? j.weight : 0), 0);
  const units = [...new Set(unit.values())].sort((a, b) => weight(a) - weight(b));
  for (let pass = 0; pass < 3; pass++) {
    for (const u of units) {
      const bent = joints.filter((j) => u.has(j.from) !== u.has(j.to));
      const pull = bent.reduce((sum, j) => sum + j.weight, 0);
      if (pull === 0) continue;
      const wish = bent.reduce((sum, j) => sum + j.weight * (u.has(j.from) ? rise(j) : -rise(j)), 0) / pull;
      const room = Math.min(...[...u].map((id) => roomToward(id, Math.sign(wish), u, ordered, y, reach)));
      const by = Math.sign(wish) * Math.max(0, Math.min(Math.abs(wish), room));
      for (const id of u) y.set(id, y.get(id)! + by);
    }
  }
}

function roomToward(
  id: string,
  way: number,
  own: ReadonlySet<string>,
  { seats, columns }: Ordered,
  y: ReadonlyMap<string, number>,
  reach: (id: string) => Reach,
): number {
  const { column, rank } = seats.get(id)!;
  const next = columns[column][rank + way];
  if (way === 0 || next === undefined || own.has(next)) return Number.POSITIVE_INFINITY;
  const [upper, lower] = way > 0 ? [id, next] : [next, id];
  return y.get(lower)! - y.get(upper)! - (reach(upper).below + seatGap + reach(lower).above);
}

/**
 * The points nearest to `wanted` (weighted least squares) that keep their order with at least `gaps` between neighbours,
 * by pooling adjacent violators.
 * @see  R. E. Barlow et al., Statistical Inference under Order Restrictions, Wiley 1972, from memory
 */
export function separated(wanted: readonly number[], weights: readonly number[], gaps: readonly number[]): number[] {
  const offset = [0];
  for (const gap of gaps) offset.push(offset[offset.length - 1] + gap);
  const pools: { sum: number; weight: number; count: number }[] = [];
  wanted.forEach((w, k) => {
    let pool = { sum: weights[k] * (w - offset[k]), weight: weights[k], count: 1 };
    for (let last = pools.at(-1); last && last.sum / last.weight > pool.sum / pool.weight; last = pools.at(-1)) {
      pools.pop();
      pool = { sum: last.sum + pool.sum, weight: last.weight + pool.weight, count: last.count + pool.count };
    }
    pools.push(pool);
  });
  return pools.flatMap((p) => Array<number>(p.count).fill(p.sum / p.weight)).map((v, k) => v + offset[k]);
}
