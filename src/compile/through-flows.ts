import { type Adjacency, adjacency } from "../numerics/graph.js";
import { factor, solve } from "../numerics/lu.js";

/** Every stream as a linear function of its source's through-flow: share * through + fixed. */
export interface Branches {
  readonly share: Float64Array;
  readonly fixed: Float64Array;
}

/** Places in flow order, by groups that feed themselves, and the streams into each. */
interface Order {
  readonly places: { readonly length: number };
  readonly from: Int32Array;
  readonly to: Int32Array;
  readonly groups: readonly Int32Array[];
  readonly into: Adjacency;
}

/** Through-flows for what is supplied to each place, or the places of a circle whose flow cannot be told. */
export function solveThrough(
  { places, from, to, groups, into }: Order,
  { share, fixed }: Branches,
  supply: Float64Array,
): { through: Float64Array } | { stuck: Int32Array } {
  const through = new Float64Array(places.length);
  const local = new Int32Array(places.length).fill(-1);
  for (const group of groups) {
    const n = group.length;
    const alone = n === 1 && !returnsTo(group[0], from, into);
    const rhs = new Float64Array(n);
    // Streams within the circle; what comes from outside is known.
    const inside: number[] = [];
    for (let i = 0; i < n; i++) local[group[i]] = i;
    for (let i = 0; i < n; i++) {
      const node = group[i];
      rhs[i] = supply[node];
      for (let e = into.start[node]; e < into.start[node + 1]; e++) {
        const k = into.edges[e];
        if (local[from[k]] < 0) rhs[i] += share[k] * through[from[k]];
        else inside.push(k);
        rhs[i] += fixed[k];
      }
    }
    const sources = Int32Array.from(inside, (k) => local[from[k]]);
    const targets = Int32Array.from(inside, (k) => local[to[k]]);
    for (let i = 0; i < n; i++) local[group[i]] = -1;
    const held = Float64Array.from(inside, (k) => share[k]);
    if (!alone && !solveCircle(n, targets, sources, held, rhs)) return { stuck: group };
    for (let i = 0; i < n; i++) through[group[i]] = rhs[i];
  }
  return { through };
}

/**
 * Solves x = rhs + shares of x around a circle, in place: by substitution along the flow once for every stream that leads
 * back, and a dense system in the flows of those alone.
 * @returns false where what goes round never gets out
 */
function solveCircle(n: number, to: Int32Array, from: Int32Array, share: Float64Array, rhs: Float64Array): boolean {
  const order = downstream(n, to, from);
  const position = new Int32Array(n);
  order.forEach((node, p) => {
    position[node] = p;
  });
  const into = adjacency(n, to);
  const tears = [...new Set(from.filter((j, e) => position[j] >= position[to[e]]))];
  /** What x is where the torn places send `sent` and nothing is supplied but `x` as it comes in. */
  const substitute = (x: Float64Array, sent: Float64Array): void => {
    for (const i of order) {
      for (let e = into.start[i]; e < into.start[i + 1]; e++) {
        const k = into.edges[e];
        const j = from[k];
        x[i] += share[k] * (position[j] >= position[i] ? sent[j] : x[j]);
      }
    }
  };
  const sent = new Float64Array(n);
  const known = rhs.slice();
  substitute(known, sent);
  const m = tears.length;
  const matrix = new Float64Array(m * m);
  const back = new Float64Array(n);
  tears.forEach((tear, column) => {
    back.fill(0);
    sent[tear] = 1;
    substitute(back, sent);
    sent[tear] = 0;
    tears.forEach((j, row) => {
      const kept = row === column ? 1 - back[j] : -back[j];
      // What is left of 1 by rounding alone is nothing: all that goes round stays.
      matrix[row * m + column] = row === column && Math.abs(kept) <= 16 * Number.EPSILON ? 0 : kept;
    });
  });
  const lu = factor(matrix, m);
  if (lu === "singular") return false;
  const z = Float64Array.from(tears, (j) => known[j]);
  solve(lu, z);
  tears.forEach((j, k) => {
    sent[j] = z[k];
  });
  substitute(rhs, sent);
  return rhs.every(Number.isFinite);
}

/** An order with few streams against it: places behind those that a search downstream finds them from. */
function downstream(n: number, to: Int32Array, from: Int32Array): Int32Array {
  const out = adjacency(n, from);
  const order = new Int32Array(n);
  const next = out.start.slice(0, n);
  const seen = new Uint8Array(n);
  const path = new Int32Array(n);
  let place = n;
  for (let root = 0; root < n; root++) {
    if (seen[root]) continue;
    let depth = 0;
    path[0] = root;
    seen[root] = 1;
    while (depth >= 0) {
      const i = path[depth];
      if (next[i] === out.start[i + 1]) {
        order[--place] = i;
        depth--;
        continue;
      }
      const j = to[out.edges[next[i]++]];
      if (seen[j]) continue;
      seen[j] = 1;
      path[++depth] = j;
    }
  }
  return order;
}

/** Does a stream lead from a place back to itself? */
function returnsTo(node: number, from: Int32Array, { start, edges }: Adjacency): boolean {
  for (let e = start[node]; e < start[node + 1]; e++) if (from[edges[e]] === node) return true;
  return false;
}
