import { flowOrder } from "./flow-order.js";
import { adjacency, type Graph } from "./graph.js";

/** What nodes get from one another, as sparse rows in flow order. Places count in that order. */
export interface FlowRows {
  readonly size: number;
  /** Node at every place. */
  readonly order: Int32Array;
  /** Row p: what comes from places before it at start[p] to middle[p], from those behind it up to start[p + 1]. */
  readonly start: Int32Array;
  readonly middle: Int32Array;
  readonly column: Int32Array;
  readonly share: Float64Array;
  /** What a node sends to itself. */
  readonly own: Float64Array;
  /**
   * For entries before the diagonal, what elimination takes off the diagonal block: share times the share of the way back,
   * and most of what would fill in beside it (modified incomplete LU; I. Gustafsson, BIT 18 (1978) 142-156).
   */
  readonly pair: Float64Array;
}

/**
 * Sorts edges into rows. Linear in nodes and edges but for the ways back, which are looked up by bisection.
 * @param share of each edge: what it brings over all that enters its end, not negative
 */
export function flowRows(graph: Graph, share: ArrayLike<number>): FlowRows {
  const { size, from, to } = graph;
  const order = flowOrder(graph, share, new Float64Array(size).fill(1));
  const place = new Int32Array(size);
  for (let p = 0; p < size; p++) place[order[p]] = p;
  const into = adjacency(size, to);
  const column = new Int32Array(share.length);
  const value = new Float64Array(share.length);
  const own = new Float64Array(size);
  const start = new Int32Array(size + 1);
  const middle = new Int32Array(size);
  let n = 0;
  for (let p = 0; p < size; p++) {
    const first = n;
    const node = order[p];
    for (let e = into.start[node]; e < into.start[node + 1]; e++) {
      const k = into.edges[e];
      const c = place[from[k]];
      if (c === p) own[p] += share[k];
      else {
        column[n] = c;
        value[n++] = share[k];
      }
    }
    sortRow(column, value, first, n);
    n = merged(column, value, first, n);
    let m = first;
    while (m < n && column[m] < p) m++;
    middle[p] = m;
    start[p + 1] = n;
  }
  const rows = { size, order, start, middle, column: column.subarray(0, n), share: value.subarray(0, n), own };
  return { ...rows, pair: pairs(rows) };
}

/** Sorts a row by its columns, equal ones staying in their order: by insertion where it is short. */
function sortRow(column: Int32Array, value: Float64Array, first: number, end: number): void {
  if (end - first > 40) {
    const [c, v] = [column.slice(first, end), value.slice(first, end)];
    Array.from(c.keys())
      .sort((a, b) => c[a] - c[b])
      .forEach((from, k) => {
        column[first + k] = c[from];
        value[first + k] = v[from];
      });
    return;
  }
  for (let e = first + 1; e < end; e++) {
    const [c, v] = [column[e], value[e]];
    let at = e;
    for (; at > first && column[at - 1] > c; at--) {
      column[at] = column[at - 1];
      value[at] = value[at - 1];
    }
    column[at] = c;
    value[at] = v;
  }
}

/** Adds up what stands in a sorted row under one column; returns the new end. */
function merged(column: Int32Array, value: Float64Array, first: number, end: number): number {
  let last = first - 1;
  for (let e = first; e < end; e++) {
    if (last >= first && column[last] === column[e]) value[last] += value[e];
    else {
      last++;
      column[last] = column[e];
      value[last] = value[e];
    }
  }
  return last + 1;
}

/** What an incomplete factor leaves out is handed to the diagonal to this part, so that sums over rows stay nearly right. */
const handed = 0.95;

function pairs({ size, start, middle, column, share }: Omit<FlowRows, "pair">): Float64Array {
  const pair = new Float64Array(share.length);
  const behind = new Float64Array(size);
  for (let p = 0; p < size; p++) for (let e = middle[p]; e < start[p + 1]; e++) behind[p] += share[e];
  for (let p = 0; p < size; p++) {
    for (let e = start[p]; e < middle[p]; e++) {
      let [low, high] = [middle[column[e]], start[column[e] + 1] - 1];
      while (low < high) {
        const half = (low + high) >> 1;
        if (column[half] < p) low = half + 1;
        else high = half;
      }
      const back = low === high && column[low] === p ? share[low] : 0;
      pair[e] = share[e] * ((1 - handed) * back + handed * behind[column[e]]);
    }
  }
  return pair;
}
