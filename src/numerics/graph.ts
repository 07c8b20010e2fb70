/** A directed graph: edge k runs from[k] -> to[k] among `size` nodes. */
export interface Graph {
  readonly size: number;
  readonly from: ArrayLike<number>;
  readonly to: ArrayLike<number>;
}

/** Edges grouped by one end: edges[start[i] .. start[i+1]) touch node i. */
export interface Adjacency {
  readonly start: Int32Array;
  readonly edges: Int32Array;
}

/** Groups edges by the given end. Linear in nodes and edges. */
export function adjacency(size: number, ends: ArrayLike<number>): Adjacency {
  const start = new Int32Array(size + 1);
  for (let k = 0; k < ends.length; k++) start[ends[k] + 1]++;
  for (let i = 0; i < size; i++) start[i + 1] += start[i];
  const next = start.slice(0, size);
  const edges = new Int32Array(ends.length);
  for (let k = 0; k < ends.length; k++) edges[next[ends[k]]++] = k;
  return { start, edges };
}

/**
 * Strongly connected groups in flow order (a group comes after all that feed it). Linear time, no recursion.
 * @see R. Tarjan, SIAM J. Comput. 1 (1972) 146-160
 */
export function stronglyConnected(graph: Graph): Int32Array[] {
  const { size, to } = graph;
  const out = adjacency(size, graph.from);
  const index = new Int32Array(size).fill(-1);
  const low = new Int32Array(size);
  const onStack = new Uint8Array(size);
  const stack: number[] = [];
  const groups: Int32Array[] = [];
  const path: number[] = [];
  const cursor = out.start.slice(0, size);
  let count = 0;
  for (let root = 0; root < size; root++) {
    if (index[root] >= 0) continue;
    path.push(root);
    while (path.length > 0) {
      const v = path[path.length - 1];
      if (index[v] < 0) {
        index[v] = low[v] = count++;
        stack.push(v);
        onStack[v] = 1;
      }
      let deeper = false;
      while (cursor[v] < out.start[v + 1]) {
        const w = to[out.edges[cursor[v]++]];
        if (index[w] < 0) {
          path.push(w);
          deeper = true;
          break;
        }
        if (onStack[w]) low[v] = Math.min(low[v], index[w]);
      }
      if (deeper) continue;
      path.pop();
      if (path.length > 0) low[path[path.length - 1]] = Math.min(low[path[path.length - 1]], low[v]);
      if (low[v] === index[v]) {
        const group: number[] = [];
        let w: number;
        do {
          w = stack.pop() as number;
          onStack[w] = 0;
          group.push(w);
        } while (w !== v);
        groups.push(Int32Array.from(group.reverse()));
      }
    }
  }
  return groups.reverse();
}

/** Which nodes can be reached from the given ones (themselves included), along edges. */
export function reachable(graph: Graph, sources: Iterable<number>): Uint8Array {
  const out = adjacency(graph.size, graph.from);
  const seen = new Uint8Array(graph.size);
  const queue = [...sources];
  for (const s of queue) seen[s] = 1;
  for (let v = queue.pop(); v !== undefined; v = queue.pop()) {
    for (let e = out.start[v]; e < out.start[v + 1]; e++) {
      const w = graph.to[out.edges[e]];
      if (!seen[w]) {
        seen[w] = 1;
        queue.push(w);
      }
    }
  }
  return seen;
}

/** Edges that close a circle in a depth-first walk from the given nodes, in the order given: 1 per back edge. */
export function backEdges(graph: Graph, sources: Iterable<number>): Uint8Array {
  const out = adjacency(graph.size, graph.from);
  const state = new Uint8Array(graph.size); // 0 new, 1 on the path, 2 done
  const back = new Uint8Array(graph.from.length);
  const cursor = out.start.slice(0, graph.size);
  for (const root of sources) {
    if (state[root]) continue;
    const path = [root];
    state[root] = 1;
    while (path.length > 0) {
      const v = path[path.length - 1];
      if (cursor[v] === out.start[v + 1]) {
        state[v] = 2;
        path.pop();
        continue;
      }
      const e = out.edges[cursor[v]++];
      const w = graph.to[e];
      if (state[w] === 1) back[e] = 1;
      else if (state[w] === 0) {
        state[w] = 1;
        path.push(w);
      }
    }
  }
  return back;
}
