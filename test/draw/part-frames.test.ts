import { describe, expect, test } from "vitest";
import { overlaps } from "../../src/draw/boxes.js";
import { flowSheet } from "../../src/draw/flow-sheet.js";
import { layOut } from "../../src/draw/layout.js";
import { network, plantOf } from "../resolve/parts.js";

const quiet = network(`feeds: {in: {flow: 1 L/min, to: bulk}}
compartments:
  bulk: {kind: stirred, volume: 300 L, to: out, exchange: {corner: 0.2 * in.flow}}
  corner: {kind: stirred, volume: 50 L}
outlets: [out]`);

const loop = network(`feeds: {in: {flow: 1 L/min, to: {inner: 80 %, out: rest}}}
compartments:
  inner: {kind: part, use: quiet.yaml, to: tail}
  tail: {kind: tubular, volume: 60 L, to: out}
  lost: {kind: dead, volume: 9 L}
outlets: [out]`);

const main = network(`feeds: {feed: {flow: 10 L/min, to: {a: 60 %, b: rest}}}
compartments:
  a: {kind: part, use: quiet.yaml, to: mix}
  b: {kind: part, use: loop.yaml, repeat: 2, to: mix}
  mix: {kind: stirred, volume: 200 L, to: {product: rest, a: 10 %}}
outlets: [product]`);

describe("frames of parts", () => {
  const plant = plantOf({ "main.yaml": main, "quiet.yaml": quiet, "loop.yaml": loop });
  const layout = layOut(flowSheet(plant));
  const within = (name: string) =>
    layout.bodies.filter((p) => p.body.role !== "dead" && p.body.name.startsWith(`${name}.`));
  const named = layout.parts.map((p) => ({ name: p.title.lines[0].words, ...p }));

  test("every part that stands by itself has one, each repeat too, and parts in parts", () => {
    expect(named.map((p) => p.name).sort()).toEqual(["a", "b", "b.1", "b.1.inner", "b.2", "b.2.inner"]);
  });

  test("it holds all bodies of the part, and no other", () => {
    for (const { name, box } of named) {
      const own = within(name);
      for (const p of own) {
        expect(box.x).toBeLessThan(p.box.x);
        expect(box.x + box.width).toBeGreaterThan(p.box.x + p.box.width);
        expect(box.y).toBeLessThan(p.box.y);
        expect(box.y + box.height).toBeGreaterThan(p.box.y + p.box.height);
      }
      for (const p of layout.bodies) expect(own.includes(p) || !overlaps(p.box, box)).toBe(true);
    }
  });

  test("its name runs over no other words", () => {
    const words = [...layout.captions, ...layout.labels.map((l) => l.caption)];
    for (const { title } of named) for (const w of words) expect(overlaps(title.box, w.box)).toBe(false);
  });

  test("the vessel's frame runs around it", () => {
    const { frame } = layout;
    for (const { box } of named) {
      expect(frame.x).toBeLessThan(box.x);
      expect(frame.y).toBeLessThan(box.y);
      expect(frame.x + frame.width).toBeGreaterThan(box.x + box.width);
      expect(frame.y + frame.height).toBeGreaterThan(box.y + box.height);
    }
  });
});
