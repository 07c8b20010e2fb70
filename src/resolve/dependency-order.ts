import { stronglyConnected } from "../numerics/graph.js";

export interface DependencyOrder {
  /** Each after all that it needs; those in circles, and those that need one of them, are left out. */
  readonly order: readonly number[];
  /** One circle for each group that needs one another: who needs the next, the first again at the end. */
  readonly circles: readonly (readonly number[])[];
}

/**
 * The order in which to evaluate what depends on one another. Linear time, no recursion.
 * @param needs what each one needs, by index
 */
export function dependencyOrder(needs: readonly (readonly number[])[]): DependencyOrder {
  const from = needs.flat();
  const to = needs.flatMap((of, i) => of.map(() => i));
  const good = new Uint8Array(needs.length);
  const order: number[] = [];
  const circles: number[][] = [];
  for (const group of stronglyConnected({ size: needs.length, from, to })) {
    const first = Math.min(...group);
    if (group.length > 1 || needs[first].includes(first)) circles.push(circleFrom(first, new Set(group), needs));
    else if (needs[first].every((i) => good[i])) {
      good[first] = 1;
      order.push(first);
    }
  }
  return { order, circles: circles.sort((a, b) => a[0] - b[0]) };
}

/** A shortest circle through one member of a group whose members all reach one another (breadth first). */
function circleFrom(first: number, group: ReadonlySet<number>, needs: readonly (readonly number[])[]): number[] {
  const cameFrom = new Map<number, number>();
  const queue = [first];
  for (const i of queue) {
    for (const next of needs[i]) {
      if (next === first) {
        const circle = [first];
        for (let at = i; at !== first; at = cameFrom.get(at) as number) circle.push(at);
        return [...circle, first].reverse();
      }
      if (!group.has(next) || cameFrom.has(next)) continue;
      cameFrom.set(next, i);
      queue.push(next);
    }
  }
  return [first, first];
}
