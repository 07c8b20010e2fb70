import { writeFileSync } from "node:fs";
import { join } from "node:path";
import { integrate } from "../../../src/index.js";
import { readNamed } from "../named-table.js";
import { warmed } from "./load.js";

const species = 4;
const [forward, back, second] = [1e6, 2.5e5, 0.8]; // 1/min, 1/min, L/mol/min
const feed = [1, 0, 0.7, 0]; // mol/L of A, B, C, D

/** A <-> B, B + C -> D in the tanks of a folder's tables, through `integrate`: folder, file for the outlet. Minutes and litres. */
export function p4([folder, out]: string[]): Record<string, unknown> {
  const volumes = readNamed(join(folder, "volumes.csv")).map(([, v]) => Number(v));
  const streams = readNamed(join(folder, "flows.csv")).map(([from, to, q]) => ({
    from: cell(from),
    to: cell(to),
    q: Number(q),
  }));
  const n = volumes.length;
  const inside = streams.filter((s) => s.from >= 0);
  const inlet = columns(
    streams.filter((s) => s.from < 0 && s.to >= 0),
    volumes,
  );
  const inner = columns(inside, volumes);
  const { pattern, entryOf } = patternOf(n, inside);
  const rhs = (_t: number, y: Float64Array, dy: Float64Array): void => {
    dy.fill(0);
    for (let e = 0; e < inlet.length; e++)
      for (let k = 0; k < species; k++) dy[inlet.to[e] + k] += inlet.brings[e] * feed[k];
    for (let e = 0; e < inner.length; e++) {
      const from = inner.from[e];
      const to = inner.to[e];
      const leaves = inner.leaves[e];
      const brings = inner.brings[e];
      for (let k = 0; k < species; k++) {
        const value = y[from + k];
        dy[from + k] -= leaves * value;
        if (to >= 0) dy[to + k] += brings * value;
      }
    }
    for (let i = 0; i < n; i++) {
      const at = i * species;
      const first = forward * y[at] - back * y[at + 1];
      const other = second * y[at + 1] * y[at + 2];
      dy[at] -= first;
      dy[at + 1] += first - other;
      dy[at + 2] -= other;
      dy[at + 3] += other;
    }
  };
  const links = inside.flatMap(({ from, to, q }) =>
    Array.from({ length: species }, (_, k) => {
      const column = from * species + k;
      return {
        own: entryOf(column, column),
        leaves: q / volumes[from],
        next: to >= 0 ? entryOf(to * species + k, column) : -1,
        brings: to >= 0 ? q / volumes[to] : 0,
      };
    }),
  );
  const local = Array.from({ length: n }, (_, i) =>
    Int32Array.from({ length: species * species }, (_, e) =>
      entryOf(i * species + Math.floor(e / species), i * species + (e % species)),
    ),
  );
  const jacobian = (_t: number, y: Float64Array, entries: Float64Array): void => {
    for (const { own, leaves, next, brings } of links) {
      entries[own] -= leaves;
      if (next >= 0) entries[next] += brings;
    }
    for (let i = 0; i < n; i++) {
      const e = local[i];
      const [byB, byC] = [second * y[i * species + 2], second * y[i * species + 1]];
      entries[e[0]] -= forward;
      entries[e[1]] += back;
      entries[e[4]] += forward;
      entries[e[5]] -= back + byB;
      entries[e[6]] -= byC;
      entries[e[9]] -= byB;
      entries[e[10]] -= byC;
      entries[e[13]] += byB;
      entries[e[14]] += byC;
    }
  };
  const outputs = Float64Array.from({ length: 200 }, (_, k) => 4000 * (k / 199) ** 3);
  const start = new Float64Array(n * species);
  const { first, best, result } = warmed(
    () =>
      integrate({
        rhs,
        jacobian,
        pattern,
        start,
        from: 0,
        to: 4000,
        method: "stiff",
        relative: 1e-6,
        absolute: 1e-10,
        outputs,
      }),
    150,
    20,
  );
  let text = "t_min,A,B,C,D\n";
  result.states.forEach((y, i) => {
    text += `${[result.times[i], ...y.subarray((n - 1) * species, n * species)].join(",")}\n`;
  });
  writeFileSync(out, text);
  return { first_s: first, solve_s: best, ...result.stats };
}

/** The number of cell `c3`; -1 for the feed and the outlet. */
const cell = (name: string): number => (/^c\d+$/.test(name) ? Number(name.slice(1)) : -1);

interface Stream {
  readonly from: number;
  readonly to: number;
  readonly q: number;
}

/** Streams as columns: first states of their ends (-4 outside), and what they take and bring, 1/min. */
const columns = (streams: readonly Stream[], volumes: readonly number[]) => ({
  length: streams.length,
  from: Int32Array.from(streams, (s) => s.from * species),
  to: Int32Array.from(streams, (s) => s.to * species),
  leaves: Float64Array.from(streams, (s) => s.q / volumes[s.from]),
  brings: Float64Array.from(streams, (s) => s.q / volumes[s.to]),
});

function patternOf(n: number, inner: readonly { from: number; to: number }[]) {
  const rows = Array.from({ length: n * species }, () => new Set<number>());
  for (let i = 0; i < n * species; i++) for (let k = 0; k < species; k++) rows[i].add(i - (i % species) + k);
  for (const { from, to } of inner) {
    if (to >= 0) for (let k = 0; k < species; k++) rows[to * species + k].add(from * species + k);
  }
  const start = new Int32Array(rows.length + 1);
  const columns = rows.map((row, i) => {
    start[i + 1] = start[i] + row.size;
    return Int32Array.from(row).sort();
  });
  const column = Int32Array.from(columns.flatMap((row) => [...row]));
  const entryOf = (row: number, of: number): number => start[row] + columns[row].indexOf(of);
  return { pattern: { size: rows.length, start, column }, entryOf };
}
