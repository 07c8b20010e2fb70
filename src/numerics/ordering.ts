import type { Pattern } from "./linear-solver.js";
import { degreeLists } from "./ordering-degrees.js";
import { becomeElement, formElement, mergeAlike, prune, quotientGraph } from "./ordering-graph.js";

/**
 * An order of elimination with little fill: approximate minimum degree on the graph of A + A', by quotient graph with
 * element absorption, mass elimination and merging of nodes that cannot be told apart. Near linear in entries for flow networks.
 * @returns the nodes in the order in which to eliminate them
 * @see P.R. Amestoy, T.A. Davis, I.S. Duff, SIAM J. Matrix Anal. Appl. 17 (1996) 886-905
 */
export function minimumDegree(pattern: Pattern): Int32Array {
  const n = pattern.size;
  const graph = quotientGraph(pattern);
  const { start, length, elements, weight } = graph;
  const degrees = degreeLists(n);
  for (let i = 0; i < n; i++) degrees.put(i, length[i]);
  const stamp = new Float64Array(n); // of element e: round + |Le outside the new element|
  const merged: number[][] = Array.from({ length: n }, () => []); // nodes eliminated together with their representative
  const order = new Int32Array(n);
  const byHash = new Map<number, number[]>();
  let count = 0;
  let round = 1;
  while (count < n) {
    const pivot = degrees.least();
    const tied = formElement(graph, pivot);
    let tiedWeight = 0;
    for (const i of tied) tiedWeight += weight[i];
    let largest = 0;
    for (const i of tied) {
      for (let k = start[i]; k < start[i] + elements[i]; k++) {
        const e = graph.pool[k];
        if (graph.gone[e]) continue;
        stamp[e] = (stamp[e] < round ? graph.size[e] + round : stamp[e]) - weight[i];
        largest = Math.max(largest, graph.size[e]);
      }
    }
    byHash.clear();
    const kept: number[] = [];
    for (const i of tied) {
      const { outside, hash } = prune(graph, i, pivot, stamp, round);
      degrees.take(i);
      if (outside === 0) {
        // Nothing but the new element touches i: it goes with the pivot and fills nothing in.
        merged[pivot].push(i);
        tiedWeight -= weight[i];
        weight[i] = 0;
        continue;
      }
      graph.size[i] = outside;
      kept.push(i);
      const alike = byHash.get(hash);
      if (alike) alike.push(i);
      else byHash.set(hash, [i]);
    }
    for (const alike of byHash.values()) if (alike.length > 1) mergeAlike(graph, alike, merged);
    const left = n - count - 1;
    const members: number[] = [];
    for (const i of kept) {
      if (weight[i] === 0) continue;
      members.push(i);
      degrees.put(
        i,
        Math.max(0, Math.min(left, degrees.known(i) + tiedWeight, graph.size[i] + tiedWeight - weight[i])),
      );
    }
    becomeElement(graph, pivot, members, tiedWeight);
    count = emit(pivot, merged, order, count);
    round += largest + 1;
  }
  return order;
}

/** Writes a node and all that was merged into it. */
function emit(node: number, merged: readonly number[][], order: Int32Array, count: number): number {
  const stack = [node];
  for (let i = stack.pop(); i !== undefined; i = stack.pop()) {
    order[count++] = i;
    for (const j of merged[i]) stack.push(j);
  }
  return count;
}
