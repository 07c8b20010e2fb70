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
      r.way.slice(1).map((to, k) => ({
        from: r.way[k],
        to,
        weight: r.trip.width,
        // where the stream leaves and arrives, from the seats' middles
        out: ports.get(r.way[k])?.right.get(r.trip) ?? 0,
        in: ports.get(to)?.left.get(r.trip) ?? 0,
      })),
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
  return y;
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
