import { adjacency, type Graph } from "./graph.js";

const buckets = 64;

/**
 * An order in which nodes come, as far as circles allow, after those that feed them: always the node next of whose
 * inflow the largest part comes from nodes that are already placed. Sweeps and incomplete factors in this order are
 * near to substitution. Linear in nodes and edges.
 * @param weight what each edge carries, not negative
 * @param inflow what each node gets in all, edges from outside included
 * @returns nodes in that order
 */
export function flowOrder(graph: Graph, weight: ArrayLike<number>, inflow: ArrayLike<number>): Int32Array {
  const { size, from, to } = graph;
  const out = adjacency(size, from);
  const placed = new Float64Array(size).fill(0);
  for (let i = 0; i < size; i++) placed[i] = inflow[i];
  for (let k = 0; k < weight.length; k++) placed[to[k]] -= weight[k];
  const order = new Int32Array(size);
  const done = new Uint8Array(size);
  // Queues by the part placed; a node may stand in several, its last is the one that counts.
  const queues: Queue[] = Array.from({ length: buckets + 1 }, () => new Queue());
  const bucketOf = (i: number): number =>
    inflow[i] > 0
      ? Math.max(0, Math.min(buckets, Math.floor((placed[i] / inflow[i]) * buckets * (1 + 1e-12))))
      : buckets;
  for (let i = 0; i < size; i++) queues[bucketOf(i)].push(i);
  let top = buckets;
  for (let n = 0; n < size; ) {
    while (queues[top].empty) top--;
    const i = queues[top].shift();
    if (done[i] || bucketOf(i) !== top) continue;
    done[i] = 1;
    order[n++] = i;
    for (let e = out.start[i]; e < out.start[i + 1]; e++) {
      const k = out.edges[e];
      const j = to[k];
      if (done[j]) continue;
      const before = bucketOf(j);
      placed[j] += weight[k];
      const after = bucketOf(j);
      if (after === before) continue;
      queues[after].push(j);
      if (after > top) top = after;
    }
  }
  return order;
}

/** First in, first out. */
class Queue {
  private items: number[] = [];
  private head = 0;

  get empty(): boolean {
    return this.head === this.items.length;
  }

  push(i: number): void {
    this.items.push(i);
  }

  shift(): number {
    const i = this.items[this.head++];
    if (this.head > 1024 && this.head * 2 > this.items.length) {
      this.items = this.items.slice(this.head);
      this.head = 0;
    }
    return i;
  }
}
