import { describe, expect, test } from "vitest";
import { overlaps } from "../../src/draw/clutter.js";
import { plotCurves } from "../../src/draw/curves.js";
import { textWidth } from "../../src/svg/measure.js";

const s = Array.from({ length: 41 }, (_, k) => k / 40);
const curves = {
  title: "States",
  x: "feed.temperature, degC",
  y: "conversion, %",
  free: true,
  lines: [
    { label: "stable", beside: true, x: s.map((t) => 10 + 20 * t), y: s.map((t) => 40 * t ** 3) },
    { label: "unstable", beside: true, x: s.map((t) => 30 - 12 * t), y: s.map((t) => 40 + 40 * t) },
  ],
  points: { x: [30, 18], y: [40, 80], names: ["ignites 30 °C", "goes out 18 °C"] },
  upright: { at: 25, label: "now 25 °C" },
};

describe("names inside a plot", () => {
  const { drawing } = plotCurves(curves, { theme: "light" });
  const texts = [...drawing.matchAll(/<text class="(\w+)" x="([\d.-]+)" y="([\d.-]+)"[^>]*>([^<]*)</g)].map(
    ([, style, x, y, words]) => ({ style, x: Number(x), y: Number(y), words }),
  );

  test("each stands once", () => {
    for (const name of ["stable", "unstable", "now 25 °C", "ignites 30 °C", "goes out 18 °C"]) {
      expect(texts.filter((t) => t.words === name)).toHaveLength(1);
    }
  });

  test("and none lies on another", () => {
    const boxes = texts
      .filter((t) => /stable|now|ignites|out/.test(t.words))
      .map((t) => ({ x: t.x, y: t.y - 9, width: textWidth(t.words, 11), height: 11 }));
    for (const [k, a] of boxes.entries()) for (const b of boxes.slice(k + 1)) expect(overlaps(a, b)).toBe(false);
  });

  test("the axis sets its unit properly, and not what only looks like one", () => {
    expect(drawing).toContain(">feed.temperature, °C<");
    expect(plotCurves({ ...curves, y: "t10 at out, m3" }).drawing).toContain(">t10 at out, m³<");
  });
});

test("what was computed is dotted where the line only joins it", () => {
  const line = { label: "a", x: [0, 1, 2], y: [1, 2, 3], dots: { x: [0, 1, 2], y: [1, Number.NaN, 3] } };
  const { drawing } = plotCurves({ title: "Dots", x: "x", y: "y", lines: [line] }, { theme: "light" });
  const d = /<path class="dots" d="([^"]+)"/.exec(drawing)?.[1] ?? "";
  expect(d.match(/M/g)).toHaveLength(2);
});
