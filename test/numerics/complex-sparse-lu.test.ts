import fc from "fast-check";
import { expect, test } from "vitest";
import { sparseComplexLu } from "../../src/numerics/complex-sparse-lu.js";
import { uniformSource } from "../simulate/seeded.js";

test("solves random sparse systems with a dominant diagonal to round-off, twice with one plan", () => {
  fc.assert(
    fc.property(fc.integer({ min: 1, max: 1e6 }), fc.integer({ min: 1, max: 40 }), (seed, n) => {
      const random = uniformSource(seed);
      const pick = () => Math.floor(random() * n);
      const links = Array.from({ length: 3 * n }, () => [pick(), pick()]);
      const lu = sparseComplexLu(
        n,
        links.map((l) => l[0]),
        links.map((l) => l[1]),
      );
      for (let round = 0; round < 2; round++) {
        const dense = Array.from({ length: n }, () => Array.from({ length: n }, () => ({ re: 0, im: 0 })));
        lu.re.fill(0);
        lu.im.fill(0);
        const put = (i: number, j: number, at: number, re: number, im: number) => {
          dense[i][j] = { re: dense[i][j].re + re, im: dense[i][j].im + im };
          lu.re[at] += re;
          lu.im[at] += im;
        };
        for (let i = 0; i < n; i++) put(i, i, lu.diagonal[i], 4 * 3 * n, random());
        links.forEach(([i, j], k) => {
          put(i, j, lu.at[k], random() - 0.5, random() - 0.5);
        });
        const b = Array.from({ length: n }, () => ({ re: random(), im: random() }));
        const [re, im] = [Float64Array.from(b, (x) => x.re), Float64Array.from(b, (x) => x.im)];
        expect(lu.factor()).toBe(true);
        lu.solve(re, im);
        for (let i = 0; i < n; i++) {
          let [left, right] = [b[i].re, b[i].im];
          for (let j = 0; j < n; j++) {
            left -= dense[i][j].re * re[j] - dense[i][j].im * im[j];
            right -= dense[i][j].re * im[j] + dense[i][j].im * re[j];
          }
          expect(Math.hypot(left, right)).toBeLessThan(1e-13);
        }
      }
    }),
    { numRuns: 60 },
  );
});

test("a chain with side pockets fills nothing in", () => {
  const n = 2000; // even: the chain; odd: pockets
  const links: [number, number][] = [];
  for (let i = 0; i + 2 < n; i += 2) links.push([i, i + 2], [i + 2, i]);
  for (let i = 0; i < n; i += 2) links.push([i, i + 1], [i + 1, i]);
  const lu = sparseComplexLu(
    n,
    links.map((l) => l[0]),
    links.map((l) => l[1]),
  );
  expect(lu.re.length).toBe(links.length + n);
});

test("a singular matrix is an answer", () => {
  const lu = sparseComplexLu(2, [0, 1], [1, 0]);
  lu.re.fill(1);
  expect(lu.factor()).toBe(false);
});
