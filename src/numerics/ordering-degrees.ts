/** Nodes filed by degree in doubly linked lists. */
export function degreeLists(n: number) {
  const head = new Int32Array(n).fill(-1);
  const next = new Int32Array(n).fill(-1);
  const last = new Int32Array(n).fill(-1);
  const degree = new Int32Array(n);
  let lowest = 0;
  const take = (i: number): void => {
    if (next[i] >= 0) last[next[i]] = last[i];
    if (last[i] >= 0) next[last[i]] = next[i];
    else head[degree[i]] = next[i];
  };
  return {
    put(i: number, d: number): void {
      degree[i] = d;
      next[i] = head[d];
      last[i] = -1;
      if (head[d] >= 0) last[head[d]] = i;
      head[d] = i;
      lowest = Math.min(lowest, d);
    },
    take,
    /** The degree that a node was last filed under. */
    known: (i: number): number => degree[i],
    /** Takes out a node of least degree. */
    least(): number {
      while (head[lowest] < 0) lowest++;
      const i = head[lowest];
      take(i);
      return i;
    },
  };
}
