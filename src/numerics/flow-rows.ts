import { flowOrder } from "./flow-order.js";
import type { Graph } from "./graph.js";

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
  // Edges by column first: handing them out in that order leaves the columns of every row ascending.
  const byColumn = new Int32Array(size + 1);
  for (let k = 0; k < share.length; k++) byColumn[place[from[k]] + 1]++;
  for (let p = 0; p < size; p++) byColumn[p + 1] += byColumn[p];
  const edges = new Int32Array(share.length);
  for (let k = 0; k < share.length; k++) edges[byColumn[place[from[k]]]++] = k;
  const room = new Int32Array(size + 1);
  for (let k = 0; k < share.length; k++) room[place[to[k]] + 1]++;
  for (let p = 0; p < size; p++) room[p + 1] += room[p];
  const column = new Int32Array(share.length);
  const value = new Float64Array(share.length);
  const own = new Float64Array(size);
  const end = room.slice(0, size);
  for (let e = 0; e < edges.length; e++) {
    const k = edges[e];
    const [row, c] = [place[to[k]], place[from[k]]];
    if (row === c) own[row] += share[k];
    else if (end[row] > room[row] && column[end[row] - 1] === c) value[end[row] - 1] += share[k];
    else {
      column[end[row]] = c;
      value[end[row]++] = share[k];
    }
  }
  const start = new Int32Array(size + 1);
  const middle = new Int32Array(size);
  let n = 0;
  for (let p = 0; p < size; p++) {
    middle[p] = n;
    for (let e = room[p]; e < end[p]; e++) {
      if (column[e] < p) middle[p] = n + 1;
      column[n] = column[e];
      value[n++] = value[e];
    }
    start[p + 1] = n;
  }
  const rows = { size, order, start, middle, column: column.subarray(0, n), share: value.subarray(0, n), own };
  return { ...rows, pair: pairs(rows) };
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
