import { expect, test } from "vitest";
import { drawChanges } from "../../src/draw/intervals.js";

const name = "A finishing tank of 800 L behind the vessel, with a baffle";
const drawn = drawChanges({
  title: "conversion",
  quantity: "conversion, %",
  rows: [{ label: name, value: 94.6, low: 93.8, high: 95.3, text: "better: above 99 %" }],
  reference: { value: 85.6, label: "today" },
});

test("long names are broken, and keep inside the drawing in a face that is a fifth wider", () => {
  const names = [...drawn.matchAll(/<text class="name" x="([\d.]+)" y="([\d.]+)" text-anchor="end">([^<]*)</g)];
  expect(names.map((n) => n[3]).join(" ")).toBe(name);
  expect(names.length).toBeGreaterThan(1);
  const left = Number(/viewBox="(-?\d+)/.exec(drawn)?.[1]);
  // Of bold DejaVu Sans, widest of the faces that may stand in, such words take 0.56 em a letter: measured in a browser.
  for (const [, x, , words] of names) expect(Number(x) - words.length * 12 * 0.56).toBeGreaterThan(left);
  const heights = names.map((n) => Number(n[2]));
  for (let k = 1; k < heights.length; k++) expect(heights[k] - heights[k - 1]).toBe(14);
});
