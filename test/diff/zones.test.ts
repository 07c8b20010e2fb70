import { describe, expect, test } from "vitest";
import { diffNetworks } from "../../src/diff/network.js";
import { network, networkOf } from "../resolve/parts.js";

const main = network(`feeds: {feed: {flow: 10 L/min, to: core}}
compartments:
  core:
    kind: zones
    volumes: {file: v.csv, id: {column: id}, volume: {column: v, unit: L}}
    flows: {file: f.csv, from: {column: from}, to: {column: to}, flow: {column: q, unit: L/min}, follow: inflow}
    to: {low: product, high: product}
outlets: [product]`);

const n = 20;
const volumes = Array.from({ length: n }, (_, i) => `c${i},${i + 1}`);
const flows = [
  "in,c0,10",
  ...Array.from({ length: n - 1 }, (_, i) => `c${i},c${i + 1},10`),
  ...["c3,c9,1", "c9,c3,1"],
  `c${n - 1},low,4`,
  `c${n - 1},high,6`,
];

const zoned = (v: readonly string[], f: readonly string[]) =>
  networkOf({ "main.yaml": main, "v.csv": `id,v\n${v.join("\n")}\n`, "f.csv": `from,to,q\n${f.join("\n")}\n` });

const told = (v: readonly string[], f: readonly string[]): string[] =>
  diffNetworks(zoned(volumes, flows), zoned(v, f)).differences.map(
    (d) => `${d.name} ${d.key}: ${d.before} -> ${d.after}`,
  );

describe("tables of a zoned body, row by row", () => {
  test("the order of rows changes nothing", () => {
    expect(told(volumes.toReversed(), flows.toReversed())).toEqual([]);
  });

  test("cells that are new, gone or larger, and flows that moved", () => {
    const changed = volumes.map((v) => (v === "c4,5" ? "c4,7.5" : v));
    const moved = flows.map((f) => f.replace(/^(c3,c9|c9,c3),1$/, "$1,2"));
    expect(told([...changed, "d,3"], [...moved, "c1,d,0.5", "d,c1,0.5"])).toEqual([
      "core cell d: none -> 3 L",
      "core cell c4: 5 L -> 7.5 L",
      "core flow c3 > c9: 1 L/min -> 2 L/min",
      "core flow c9 > c3: 1 L/min -> 2 L/min",
      "core flow c1 > d: none -> 0.5 L/min",
      "core flow d > c1: none -> 0.5 L/min",
    ]);
  });

  test("the ten that moved most; the rest is counted", () => {
    const all = told(
      volumes.map((v, i) => `${v.split(",")[0]},${(i + 1) * 2}`),
      flows,
    );
    expect(all.slice(0, 2)).toEqual(["core cell c19: 20 L -> 40 L", "core cell c18: 19 L -> 38 L"]);
    expect(all).toHaveLength(11);
    expect(all[10]).toBe("core 10 more cells: as they were -> 0 added, 0 removed, 10 changed");
  });

  test("what leaves by the outlets is told as flows of the table, not as shares of nobody's writing", () => {
    const moved = flows.map((f) => f.replace(/low,4$/, "low,5").replace(/high,6$/, "high,5"));
    expect(told(volumes, moved)).toEqual([
      "core flow c19 > low: 4 L/min -> 5 L/min",
      "core flow c19 > high: 6 L/min -> 5 L/min",
    ]);
  });
});
