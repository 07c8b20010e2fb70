import type { Plant } from "../compile/plant.js";

/** Flows of every link and through every node, m3/s, what feeds bring behind the nodes; the arrays are reused. */
export interface FlowsNow {
  readonly link: Float64Array;
  readonly node: Float64Array;
  /** The same number only where the flows are the same. */
  readonly stamp: number;
}

/**
 * How the flows of a plant go on in time, from 0 on; as they were then before. Volumes are constant, so what has entered pushes out as
 * much. A node may be a feed: the number of nodes plus its own. Of a jump, side 1 is after it, -1 before.
 */
export interface FlowCourse {
  readonly constant: boolean;
  /** Times, s, where flows kink, or, twice, jump. */
  readonly knots: Float64Array;
  at(t: number, side?: number): FlowsNow;
  /** m3/s through one node. */
  through(node: number, t: number, side?: number): number;
  /** m3 that pass a node from one time to another. */
  passed(node: number, from: number, to: number): number;
  /** When so many m3 less had passed a node than by t, s: before 0 by the flows that there were. */
  when(node: number, t: number, volume: number): number;
  /** When what now leaves a delay of a volume has entered it, s; -Infinity where that was before 0. */
  entered(node: number, t: number, volume: number): number;
  /** When what now enters will leave. */
  leaves(node: number, t: number, volume: number): number;
  /** The shortest that a delay ever gets, s. */
  shortest(node: number, volume: number): number;
}

/** What passes every node of a plant, and behind them what its feeds bring, m3/s. */
export function nodeFlows({ columns, feeds }: Plant): Float64Array {
  const flows = new Float64Array(columns.size + feeds.length);
  flows.set(columns.inflow);
  feeds.forEach((f, k) => {
    flows[columns.size + k] = f.flow;
  });
  return flows;
}

/** The steady flows of a plant. */
export function steadyCourse(plant: Plant): FlowCourse {
  const now = { link: plant.flow, node: nodeFlows(plant), stamp: 0 };
  const through = (node: number): number => now.node[node];
  const late = (node: number, volume: number) => volume / through(node);
  return {
    constant: true,
    knots: new Float64Array(0),
    at: () => now,
    through,
    passed: (node, from, to) => through(node) * (to - from),
    when: (node, t, volume) => t - late(node, volume),
    entered: (node, t, volume) => (t < late(node, volume) ? Number.NEGATIVE_INFINITY : t - late(node, volume)),
    leaves: (node, t, volume) => t + late(node, volume),
    shortest: late,
  };
}

/** Times closer than this, relative, are one. */
const sameTime = 2e-12;

/**
 * Flows that are linear between knots, and constant before the first and after the last.
 * @param knots ascending, s; two at one time are a jump
 * @param links m3/s of every link at every knot; balanced, so that they are in between as well
 * @param nodes what passes every node then, and what feeds bring behind them
 */
export function loggedCourse(
  knots: Float64Array,
  links: readonly Float64Array[],
  nodes: readonly Float64Array[],
): FlowCourse {
  const last = knots.length - 1;
  const now = { link: new Float64Array(links[0].length), node: new Float64Array(nodes[0].length), stamp: -2 };
  let [changed, known, knownPiece] = [-2, Number.NaN, -1];
  /** By piece, where flows are constant over it. */
  const still = knots.map((_, k) => (k < last && sameFlows(k) ? 1 : 0));
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
  /** The piece that holds t, of two at a knot by the side: -1 before the first knot, `last` after the last. */
  const pieceOf = (values: Float64Array, x: number, side = 0): number => {
    const soft = x + side * sameTime * Math.abs(x);
    let [low, high] = [-1, values.length];
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (side < 0 ? values[middle] < soft : values[middle] <= soft) low = middle;
      else high = middle;
    }
    return low;
  };
  const partOf = (k: number, t: number): number => Math.max(0, Math.min(1, (t - knots[k]) / (knots[k + 1] - knots[k])));
  const through = (node: number, t: number, side?: number): number => {
    const k = pieceOf(knots, t, side);
    if (k < 0) return nodes[0][node];
    if (k >= last) return nodes[last][node];
    return nodes[k][node] + partOf(k, t) * (nodes[k + 1][node] - nodes[k][node]);
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
    at(t, side) {
      const k = pieceOf(knots, t, side);
      const constant = k < 0 || k >= last || still[k] === 1;
      if (constant ? now.stamp === k + 1 : t === known && k === knownPiece) return now;
      [known, knownPiece] = [t, k];
      now.stamp = constant ? k + 1 : --changed;
      const a = Math.max(0, k);
      const part = constant ? 0 : partOf(k, t);
      for (let i = 0; i < now.link.length; i++)
        now.link[i] = part === 0 ? links[a][i] : links[a][i] + part * (links[a + 1][i] - links[a][i]);
      for (let i = 0; i < now.node.length; i++)
        now.node[i] = part === 0 ? nodes[a][i] : nodes[a][i] + part * (nodes[a + 1][i] - nodes[a][i]);
      return now;
    },
    through,
    passed: (node, from, to) => volumeAt(node, to) - volumeAt(node, from),
    when: (node, t, volume) => timeAt(node, volumeAt(node, t) - volume),
    entered(node, t, volume) {
      const before = timeAt(node, volumeAt(node, t) - volume);
      return before < 0 ? Number.NEGATIVE_INFINITY : before;
    },
    leaves: (node, t, volume) => timeAt(node, volumeAt(node, t) + volume),
    shortest: (node, volume) => volume / nodes.reduce((most, row) => Math.max(most, row[node]), 0),
  };

  function sameFlows(k: number): boolean {
    return nodes[k].every((q, i) => q === nodes[k + 1][i]) && links[k].every((q, i) => q === links[k + 1][i]);
  }
}
