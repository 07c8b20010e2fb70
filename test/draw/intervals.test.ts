import { expect, test } from "vitest";
import { plotIntervals } from "../../src/draw/intervals.js";
import { columnWidth } from "../../src/draw/picture.js";

const name = "A finishing tank of 800 L behind the vessel, with a baffle and a second outlet";
const { drawing, data } = plotIntervals(
  {
    title: "conversion",
    quantity: "conversion, %",
    rows: [
      { label: name, value: 94.6, low: 93.8, high: 95.3, text: "94.6 % (93.8 to 95.3)", under: "better: above 99 %" },
      { label: "Deflector", value: 92.4, low: 91.2, high: 93.5, text: "92.4 % (91.2 to 93.5)" },
    ],
    reference: { value: 85.6, label: "today" },
  },
  { width: columnWidth },
);

test("long names are broken, and leave the number its place in a face that is a fifth wider", () => {
  const names = [...drawing.matchAll(/<text class="name" x="([\d.]+)" y="([\d.]+)">([^<]*)</g)].slice(0, -1);
  expect(names.map((n) => n[3]).join(" ")).toBe(name);
  expect(names.length).toBeGreaterThan(1);
  // Of bold DejaVu Sans, widest of the faces that may stand in, such words take 0.56 em a letter: measured in a browser.
  const value = columnWidth - "94.6 % (93.8 to 95.3)".length * 11 * 0.55;
  for (const [, x, , words] of names) expect(Number(x) + words.length * 12 * 0.56).toBeLessThan(value);
  const heights = names.map((n) => Number(n[2]));
  for (let k = 1; k < heights.length; k++) expect(heights[k] - heights[k - 1]).toBe(14);
});

test("each row has its place for those who point at it, one below the other", () => {
  const boxes = "table" in data ? (data.table.boxes ?? []) : [];
  expect(boxes.length).toBe(2);
  expect(boxes[1].y).toBeGreaterThanOrEqual(boxes[0].y + boxes[0].height);
  const marks = [...drawing.matchAll(/<circle [^>]*cy="([\d.]+)"/g)].map((m) => Number(m[1]));
  marks.forEach((y, k) => {
    expect(y).toBeGreaterThan(boxes[k].y);
    expect(y).toBeLessThan(boxes[k].y + boxes[k].height);
  });
});
