import { expect, test } from "vitest";
import { random } from "../../src/numerics/random.js";
import { backmix } from "../cli/fake.js";
import { readingOf, sampled, tanks } from "./helpers.js";

// A stirred tank forgets how long it has held a parcel: L and the age density I follow in closed form.
test("a stirred tank: intensity 1/tau throughout, internal age like exit age", () => {
  const { curve } = readingOf(sampled((t) => tanks(1, 10)(t), 120, 1200));
  if (!curve?.I) throw new Error("no curve");
  for (const i of [50, 200, 500]) {
    expect(curve.L[i] * 600).toBeCloseTo(1, 2);
    expect(curve.I[i] / curve.E[i]).toBeCloseTo(1, 2);
  }
});

test("errors of percentiles are what repeated noise shows", () => {
  const noise = random(4);
  const found = { t16: [] as number[], t50: [] as number[], t84: [] as number[] };
  const claimed = { t16: 0, t50: 0, t84: 0 };
  const runs = 150;
  for (let run = 0; run < runs; run++) {
    const r = readingOf(sampled((t) => tanks(3, 10)(t) + 0.001 * noise.normal(), 60, 150));
    for (const p of ["t16", "t50", "t84"] as const) {
      found[p].push(r[p].value ?? Number.NaN);
      claimed[p] += ("standardError" in r[p] ? (r[p].standardError ?? 0) : 0) / runs;
    }
  }
  for (const p of ["t16", "t50", "t84"] as const) {
    const mean = found[p].reduce((a, b) => a + b, 0) / runs;
    const sd = Math.sqrt(found[p].reduce((s, v) => s + (v - mean) ** 2, 0) / (runs - 1));
    expect(claimed[p] / sd).toBeGreaterThan(0.7);
    expect(claimed[p] / sd).toBeLessThan(1.5);
  }
});

test("moments -o writes E, F, W, internal age and intensity, a row for every point", async () => {
  const { status, written } = await backmix(["moments", "networks/tour/salt.yaml", "-o", "ages.csv"]);
  expect(status).toBe(0);
  const [head, ...rows] = (written.get("ages.csv") ?? "").trim().split("\n");
  expect(head).toBe("at,time [min],E [1/min],F,W,standard error of F,I [1/min],L [1/min]");
  expect(rows.length).toBeGreaterThan(30);
  const [, , , F, W] = rows[20].split(",").map(Number);
  expect(F + W).toBeCloseTo(1, 12);
  expect((await backmix(["moments", "networks/tour/salt.yaml", "-o", "ages.txt"])).status).toBe(2);
});
