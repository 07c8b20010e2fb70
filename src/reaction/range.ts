import type { Conditions } from "./conditions.js";
import type { GroupBalance } from "./group.js";
import type { Range } from "./group-search.js";

/** Temperatures that a group can have: what it is fed and jacketed with, warmed and cooled by all that can react. */
export function rangeOf(
  { reactionsAt, heat, scale, size: n }: Conditions,
  nodes: Int32Array,
  balance: GroupBalance,
  outside: Float64Array,
): Range {
  const cell = reactionsAt(nodes[0]).pocket;
  if (!heat) return { cell, temperatures: undefined };
  const mixed = balance.mixed() ?? outside;
  const levels = Array.from(nodes, (_, k) => mixed[k * n + n - 1]);
  for (const node of nodes) {
    const wall = heat.wallAt(node);
    if (wall) levels.push(wall.outside / scale[n - 1]);
  }
  // What there can be of each species, with all that others can turn into it.
  const there = Float64Array.from({ length: n - 1 }, (_, i) =>
    Math.max(...Array.from(nodes, (_, k) => mixed[k * n + i])),
  );
  const can = there.slice();
  const extents = cell.numbers.map(() => 0);
  for (let round = 0; round < 4; round++) {
    cell.numbers.forEach((row, r) => {
      let most = Number.POSITIVE_INFINITY;
      for (let i = 0; i < n - 1; i++) if (row[i] < 0) most = Math.min(most, can[i] / -row[i]);
      extents[r] = Number.isFinite(most) ? most : 0;
    });
    for (let i = 0; i < n - 1; i++) {
      can[i] = there[i] + cell.numbers.reduce((sum, row, r) => sum + Math.max(row[i], 0) * extents[r], 0);
    }
  }
  let [up, down] = [0, 0];
  cell.numbers.forEach((row, r) => {
    const rise = row[n - 1] * extents[r];
    if (rise > 0) up += rise;
    else down += rise;
  });
  // What leaves warms the feed: a rise then counts several times.
  const back = Math.min(0.95, Math.max(0, ...heat.exchangers.map((e) => e.gain)));
  up /= 1 - back;
  down /= 1 - back;
  const [low, high] = [Math.min(...levels), Math.max(...levels)];
  return { cell, temperatures: [Math.max(low + down, low / 2), Math.min(high + up, 20 * high)] };
}
