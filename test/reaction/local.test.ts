import { describe, expect, it } from "vitest";
import { placesByNode } from "../../src/reaction/places.js";
import { steadyState } from "../../src/reaction/steady.js";
import { chemistryOf, decay, dutyOf, plantOf, power, type Sketch, value } from "./make.js";

const local = (places: Record<string, Record<string, number>>) => {
  const at = dutyOf(undefined, {}).at;
  const placed = (constants: Record<string, number>) =>
    new Map(Object.entries(constants).map(([name, k]) => [name, { at, value: value(k) }]));
  return new Map(Object.entries(places).map(([place, constants]) => [place, { at, constants: placed(constants) }]));
};

const row: Sketch = {
  cells: { "chain.1": 2, "chain.2": 3 },
  tubes: { tube: 1.5 },
  links: [
    ["feed", "chain.1", 1],
    ["chain.1", "chain.2", 1],
    ["chain.2", "tube", 1],
    ["tube", "out", 1],
  ],
};

describe("constants that hold in some places only", () => {
  const first = decay(0.7, 1);
  const fed = dutyOf(first, { feed: { A: 5 } });

  it("first order: each body by its own constant, a member before its row", () => {
    const duty = { ...fed, local: local({ chain: { k: 0.2 }, "chain.2": { k: 0 }, tube: { k: 1.1 } }) };
    const state = steadyState(plantOf(row), first, duty);
    expect(state.outlets[0].concentrations[0]).toBeCloseTo((5 / (1 + 0.2 * 2)) * Math.exp(-1.1 * 1.5), 12);
    expect(Math.abs(state.closure[0])).toBeLessThan(1e-11);
  });

  it("the same constant written everywhere changes nothing, also in circles", () => {
    const circle: Sketch = {
      cells: { a: 2, b: 3 },
      tubes: { tube: 1 },
      links: [
        ["feed", "a", 1],
        ["a", "b", 3],
        ["b", "tube", 2],
        ["tube", "a", 2],
        ["b", "out", 1],
      ],
    };
    const second = chemistryOf(["A", "B"], { k: 0.4 }, [power(2, [1, 1], [-1, -1])]);
    const duty = dutyOf(second, { feed: { A: 3, B: 2 } });
    const plain = steadyState(plantOf(circle), second, duty);
    const written = { ...duty, local: local({ a: { k: 0.4 }, b: { k: 0.4 }, tube: { k: 0.4 } }) };
    expect(steadyState(plantOf(circle), second, written).concentrations).toEqual(plain.concentrations);
    const only = { ...duty, local: local({ b: { k: 4 } }) };
    const state = steadyState(plantOf(circle), second, only);
    expect(state.converged).toBe(true);
    expect(state.outlets[0].concentrations[0]).toBeLessThan(plain.outlets[0].concentrations[0]);
    for (const c of state.closure) expect(Math.abs(c)).toBeLessThan(1e-10);
  });

  it("a place is a body with its members and pockets, and nothing that only begins alike", () => {
    const links = ["feed", "chain.1", "chain.2.stagnant", "chains", "chain", "out"];
    const sketch: Sketch = { cells: {}, links: links.slice(1).map((name, i) => [links[i], name, 1] as const) };
    const plant = plantOf(sketch);
    const found = placesByNode(plant, ["chain.2", "chain"]);
    const names = [...found].map(([node, places]) => [plant.columns.nameOf(node), places]);
    expect(names).toEqual([
      ["chain.1", ["chain"]],
      ["chain.2.stagnant", ["chain", "chain.2"]],
      ["chain", ["chain"]],
    ]);
  });
});
