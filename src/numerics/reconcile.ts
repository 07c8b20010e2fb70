/** Flows along edges that should balance at every node. An end below zero is a terminal: inlet or outlet -1 - end. */
export interface FlowTable {
  readonly size: number;
  readonly from: Int32Array;
  readonly to: Int32Array;
  readonly flow: Float64Array;
}

/** What the flow out of each inlet and into each outlet must be; undefined: what comes of it. */
export interface TerminalFlows {
  readonly inlets: Float64Array;
  readonly outlets: Float64Array | undefined;
}

/**
 * Flows in balance at every node, nearest to the given ones by the sum of squared relative changes. The multipliers solve
 * a graph Laplacian weighted with the squares of the flows, by conjugate gradients (symmetric Gauss-Seidel before them).
 * @returns "impossible" where no such flows are found: a part without an outlet, or a flow that would turn round
 * @see F. Madron, Process Plant Performance, Ellis Horwood 1992 (reconciliation); D.R. Kuehn, H. Davidson, Chem. Eng.
 *      Prog. 57 (1961) 44-47; Y. Saad, Iterative Methods for Sparse Linear Systems, 2nd ed., SIAM 2003, ch. 9
 */
export function reconcileFlows(table: FlowTable, terminals: TerminalFlows): Float64Array | "impossible" {
  const { size, from, to } = table;
  const inlets = terminals.inlets.length;
  const held = size + inlets + (terminals.outlets?.length ?? 0);
  // Unknowns: nodes, then inlets, then outlets where their flow is given; a free outlet is the ground.
  const tail = Int32Array.from(from, (i) => (i >= 0 ? i : size - 1 - i));
  const head = Int32Array.from(to, (i) => (i >= 0 ? i : terminals.outlets ? size + inlets - 1 - i : -1));
  const flow = table.flow.slice();
  const weight = flow.map((q) => q * q);
  const lacking = new Float64Array(held);
  const laplacian = pattern(held, tail, head, weight);
  const multiplier = new Float64Array(held);
  let before = Number.POSITIVE_INFINITY;
  for (let round = 0; round < mostRounds; round++) {
    const worst = imbalance(table, flow, tail, head, terminals, lacking);
    // Where a round no longer helps, only rounding of long sums is left.
    if (worst <= wanted || (worst <= enough && worst > before / 2)) return flow;
    before = worst;
    if (!conjugateGradients(laplacian, lacking, multiplier)) return "impossible";
    for (let k = 0; k < flow.length; k++) {
      const change = multiplier[tail[k]] - (head[k] < 0 ? 0 : multiplier[head[k]]);
      flow[k] += weight[k] * change;
      if (!(flow[k] > gone * table.flow[k])) return "impossible";
    }
  }
  return imbalance(table, flow, tail, head, terminals, lacking) <= enough ? flow : "impossible";
}

const mostRounds = 6;
/** A flow of which less than this is left would have to vanish or turn round. */
const gone = 1e-6;
/** Relative to what passes a node. */
const wanted = 4 * Number.EPSILON;
const enough = 1e-13;

/** What each node gets more than it gives; returns the largest, relative to what passes. */
function imbalance(
  { size }: FlowTable,
  flow: Float64Array,
  tail: Int32Array,
  head: Int32Array,
  { inlets, outlets }: TerminalFlows,
  lacking: Float64Array,
): number {
  const passing = new Float64Array(lacking.length);
  lacking.fill(0);
  lacking.set(inlets, size);
  if (outlets)
    lacking.set(
      outlets.map((q) => -q),
      size + inlets.length,
    );
  for (let k = 0; k < flow.length; k++) {
    lacking[tail[k]] -= flow[k];
    passing[tail[k]] += flow[k];
    if (head[k] < 0) continue;
    lacking[head[k]] += flow[k];
    passing[head[k]] += flow[k];
  }
  let worst = 0;
  for (let i = 0; i < passing.length; i++) {
    const through = i < size ? passing[i] / 2 : passing[i];
    if (lacking[i] !== 0) worst = Math.max(worst, Math.abs(lacking[i]) / through);
  }
  return worst;
}

/** A symmetric matrix with its rows' lower and upper parts apart: entries are -weight, doubled edges kept apart. */
interface Laplacian {
  readonly start: Int32Array;
  readonly other: Int32Array;
  readonly weight: Float64Array;
  readonly diagonal: Float64Array;
}

function pattern(size: number, tail: Int32Array, head: Int32Array, weight: Float64Array): Laplacian {
  const start = new Int32Array(size + 1);
  const diagonal = new Float64Array(size);
  for (let k = 0; k < weight.length; k++) {
    diagonal[tail[k]] += weight[k];
    if (head[k] < 0) continue;
    diagonal[head[k]] += weight[k];
    start[tail[k] + 1]++;
    start[head[k] + 1]++;
  }
  for (let i = 0; i < size; i++) start[i + 1] += start[i];
  const next = start.slice(0, size);
  const other = new Int32Array(start[size]);
  const weights = new Float64Array(start[size]);
  const put = (i: number, j: number, w: number): void => {
    other[next[i]] = j;
    weights[next[i]++] = w;
  };
  for (let k = 0; k < weight.length; k++) {
    if (head[k] < 0) continue;
    put(tail[k], head[k], weight[k]);
    put(head[k], tail[k], weight[k]);
  }
  return { start, other, weight: weights, diagonal };
}

/** Solves L x = b to a small part of b; false where it does not get there. */
function conjugateGradients(l: Laplacian, b: Float64Array, x: Float64Array): boolean {
  const n = b.length;
  const r = b.slice();
  const z = new Float64Array(n);
  const p = new Float64Array(n);
  const ap = new Float64Array(n);
  x.fill(0);
  const goal = 1e-8 * norm(b);
  let rho = 0;
  for (let step = 0; step < 20_000; step++) {
    if (norm(r) <= goal) return true;
    sweep(l, r, z);
    const next = dot(r, z);
    const beta = step === 0 ? 0 : next / rho;
    rho = next;
    for (let i = 0; i < n; i++) p[i] = z[i] + beta * p[i];
    apply(l, p, ap);
    const alpha = rho / dot(p, ap);
    if (!Number.isFinite(alpha)) return false;
    for (let i = 0; i < n; i++) {
      x[i] += alpha * p[i];
      r[i] -= alpha * ap[i];
    }
  }
  return false;
}

function apply({ start, other, weight, diagonal }: Laplacian, x: Float64Array, y: Float64Array): void {
  for (let i = 0; i < x.length; i++) {
    let sum = diagonal[i] * x[i];
    for (let e = start[i]; e < start[i + 1]; e++) sum -= weight[e] * x[other[e]];
    y[i] = sum;
  }
}

/** z = one symmetric Gauss-Seidel sweep at L z = r from zero. A node without flow is left at zero. */
function sweep({ start, other, weight, diagonal }: Laplacian, r: Float64Array, z: Float64Array): void {
  const n = r.length;
  for (let i = 0; i < n; i++) {
    let sum = r[i];
    for (let e = start[i]; e < start[i + 1]; e++) if (other[e] < i) sum += weight[e] * z[other[e]];
    z[i] = diagonal[i] > 0 ? sum / diagonal[i] : 0;
  }
  for (let i = n - 1; i >= 0; i--) {
    let sum = diagonal[i] * z[i];
    for (let e = start[i]; e < start[i + 1]; e++) if (other[e] > i) sum += weight[e] * z[other[e]];
    z[i] = diagonal[i] > 0 ? sum / diagonal[i] : 0;
  }
}

const norm = (x: Float64Array): number => Math.sqrt(dot(x, x));

function dot(x: Float64Array, y: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < x.length; i++) sum += x[i] * y[i];
  return sum;
}
