import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { dependencyOrder } from "../../src/resolve/dependency-order.js";

const graphs = fc
  .integer({ min: 1, max: 12 })
  .chain((n) => fc.array(fc.uniqueArray(fc.nat(n - 1), { maxLength: 3 }), { minLength: n, maxLength: n }));

/** Can i reach itself by what it needs, or anything that can? */
function tainted(needs: readonly (readonly number[])[]): boolean[] {
  const reach = needs.map((_, i) => {
    const seen = new Set<number>();
    const queue = [...needs[i]];
    for (const j of queue) if (!seen.has(j)) queue.push(...(seen.add(j) && needs[j]));
    return seen;
  });
  return needs.map((_, i) => [i, ...reach[i]].some((j) => reach[j].has(j)));
}

describe("the order of what depends on one another", () => {
  test("each after all that it needs; none that needs a circle", () => {
    fc.assert(
      fc.property(graphs, (needs) => {
        const { order } = dependencyOrder(needs);
        const bad = tainted(needs);
        expect([...order].sort((a, b) => a - b)).toEqual([...needs.keys()].filter((i) => !bad[i]));
        order.forEach((i, k) => {
          expect(needs[i].every((j) => order.indexOf(j) < k)).toBe(true);
        });
      }),
      { seed: 20261205 },
    );
  });

  test("circles are circles, and there are some exactly where something is left out", () => {
    fc.assert(
      fc.property(graphs, (needs) => {
        const { order, circles } = dependencyOrder(needs);
        expect(circles.length > 0).toBe(order.length < needs.length);
        for (const circle of circles) {
          expect(circle.at(-1)).toBe(circle[0]);
          expect(circle[0]).toBe(Math.min(...circle));
          expect(new Set(circle).size).toBe(circle.length - 1);
          for (let k = 1; k < circle.length; k++) expect(needs[circle[k - 1]]).toContain(circle[k]);
        }
      }),
      { seed: 20261206 },
    );
  });

  test("100,000 in a row", () => {
    const n = 100_000;
    const { order, circles } = dependencyOrder(Array.from({ length: n }, (_, i) => (i + 1 < n ? [i + 1] : [])));
    expect(circles).toEqual([]);
    expect([order[0], order[n - 1]]).toEqual([n - 1, 0]);
  });
});
