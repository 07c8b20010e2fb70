import type { Plant } from "../compile/plant.js";

/** Flows of every link and through every node, m3/s; the arrays are reused. */
export interface FlowsNow {
  readonly link: Float64Array;
  readonly node: Float64Array;
}

/** How the flows of a plant go on in time, from 0 on. Volumes are constant, so what has entered pushes out as much. */
export interface FlowCourse {
  readonly constant: boolean;
  /** Times, s, where flows kink. */
  readonly knots: Float64Array;
  at(t: number): FlowsNow;
  /** m3/s through one node. */
  through(node: number, t: number): number;
  /** When what now leaves a delay of a volume has entered it, s; -Infinity where that was before 0. */
  entered(node: number, t: number, volume: number): number;
  /** When what now enters will leave. */
  leaves(node: number, t: number, volume: number): number;
  /** The shortest that a delay ever gets, s. */
  shortest(node: number, volume: number): number;
}

/** The steady flows of a plant. */
export function steadyCourse({ flow, columns }: Plant): FlowCourse {
  const now = { link: flow, node: columns.inflow };
  const late = (node: number, volume: number) => volume / columns.inflow[node];
  return {
    constant: true,
    knots: new Float64Array(0),
    at: () => now,
    through: (node) => columns.inflow[node],
    entered: (node, t, volume) => (t < late(node, volume) ? Number.NEGATIVE_INFINITY : t - late(node, volume)),
    leaves: (node, t, volume) => t + late(node, volume),
    shortest: late,
  };
}

/**
 * Flows that are linear between knots, and constant before the first and after the last.
 * @param knots ascending, s
 * @param links m3/s of every link at every knot; balanced, so that they are in between as well
 * @param nodes what passes every node then
 */
export function loggedCourse(
  knots: Float64Array,
  links: readonly Float64Array[],
  nodes: readonly Float64Array[],
): FlowCourse {
  const last = knots.length - 1;
  const now = { link: new Float64Array(links[0].length), node: new Float64Array(nodes[0].length) };
  let known = Number.NaN;
  /** m3 that have passed a node since the first knot, at every knot. */
  const passed = new Map<number, Float64Array>();
  const passedBy = (node: number): Float64Array => {
    let sums = passed.get(node);
    if (!sums) {
      sums = new Float64Array(knots.length);
      for (let k = 0; k < last; k++) {
        sums[k + 1] = sums[k] + ((nodes[k][node] + nodes[k + 1][node]) / 2) * (knots[k + 1] - knots[k]);
      }
      passed.set(node, sums);
    }
    return sums;
  };
  /** The piece that holds t: -1 before the first knot, `last` after the last. */
  const pieceOf = (values: Float64Array, x: number): number => {
    let [low, high] = [-1, values.length];
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (values[middle] <= x) low = middle;
      else high = middle;
    }
    return low;
  };
  const through = (node: number, t: number): number => {
    const k = pieceOf(knots, t);
    if (k < 0) return nodes[0][node];
    if (k >= last) return nodes[last][node];
    const part = (t - knots[k]) / (knots[k + 1] - knots[k]);
    return nodes[k][node] + part * (nodes[k + 1][node] - nodes[k][node]);
  };
  const volumeAt = (node: number, t: number): number => {
    const sums = passedBy(node);
    const k = pieceOf(knots, t);
    if (k < 0) return nodes[0][node] * (t - knots[0]);
    return sums[k] + ((nodes[k][node] + through(node, t)) / 2) * (t - knots[k]);
  };
  const timeAt = (node: number, volume: number): number => {
    const sums = passedBy(node);
    const k = pieceOf(sums, volume);
    if (k < 0) return knots[0] + volume / nodes[0][node];
    const more = volume - sums[k];
    const q = nodes[k][node];
    if (k >= last) return knots[last] + more / q;
    const slope = (nodes[k + 1][node] - q) / (knots[k + 1] - knots[k]);
    // q h + slope h^2 / 2 = more, written so that a small slope loses no digits
    return knots[k] + (2 * more) / (q + Math.sqrt(Math.max(0, q * q + 2 * slope * more)));
  };
  return {
    constant: false,
    knots,
    at(t) {
      if (t === known) return now;
      const k = Math.max(0, Math.min(last - 1, pieceOf(knots, t)));
      const span = last > 0 ? knots[k + 1] - knots[k] : 1;
      const part = Math.max(0, Math.min(1, (t - knots[k]) / span));
      const [a, b] = [k, Math.min(last, k + 1)];
      for (let i = 0; i < now.link.length; i++) now.link[i] = links[a][i] + part * (links[b][i] - links[a][i]);
      for (let i = 0; i < now.node.length; i++) now.node[i] = nodes[a][i] + part * (nodes[b][i] - nodes[a][i]);
      known = t;
      return now;
    },
    through,
    entered(node, t, volume) {
      const before = timeAt(node, volumeAt(node, t) - volume);
      return before < 0 ? Number.NEGATIVE_INFINITY : before;
    },
    leaves: (node, t, volume) => timeAt(node, volumeAt(node, t) + volume),
    shortest: (node, volume) => volume / nodes.reduce((most, row) => Math.max(most, row[node]), 0),
  };
}
