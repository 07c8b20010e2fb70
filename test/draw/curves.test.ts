import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { linearAxis, logAxis } from "../../src/draw/axes.js";
import { overlaps } from "../../src/draw/clutter.js";
import { drawCurves } from "../../src/draw/curves.js";
import { drawFit } from "../../src/draw/fit-curve.js";
import { separated } from "../../src/draw/heights.js";
import { plotIntervals } from "../../src/draw/intervals.js";
import { columnWidth } from "../../src/draw/picture.js";
import { textWidth } from "../../src/svg/measure.js";
import type { Box } from "../../src/svg/svg.js";

/** Boxes of all words of a drawing, as the browser would set them. */
function wordBoxes(svg: string): { words: string; box: Box }[] {
  const found = svg.matchAll(/<text class="(\w+)" x="([-\d.]+)" y="([-\d.]+)"(?: text-anchor="(\w+)")?>([^<]*)</g);
  return [...found].map(([, style, x, y, anchor, words]) => {
    const size = style === "title" ? 15 : style === "name" ? 12 : 11;
    const width = textWidth(words, size) / 1.04;
    const left = Number(x) - (anchor === "middle" ? width / 2 : anchor === "end" ? width : 0);
    return { words, box: { x: left, y: Number(y) - size * 0.72, width, height: size * 0.72 } };
  });
}

const collisions = (svg: string): string[] => {
  const all = wordBoxes(svg);
  return all.flatMap((a, k) =>
    all.slice(k + 1).flatMap((b) => (overlaps(a.box, b.box) ? [`${a.words} on ${b.words}`] : [])),
  );
};

const outside = (svg: string): string[] => {
  const [x, y, width, height] = /viewBox="([^"]+)"/.exec(svg)![1].split(" ").map(Number);
  return wordBoxes(svg)
    .filter(({ box }) => box.x < x || box.y < y || box.x + box.width > x + width || box.y + box.height > y + height)
    .map((w) => w.words);
};

const time = Array.from({ length: 60 }, (_, k) => k * 5);
const fitted = time.map((t) => 0.04 * Math.exp(-t / 60));
const residual = time.map((t) => 0.001 * Math.sin(t * t));
const reading = {
  label: "Salt pulse",
  source: "salt.csv",
  time,
  fitted,
  residual,
  measured: fitted.map((v, k) => v + residual[k]),
  leftOut: [{ time: 290, because: "air in the cell" }],
};

describe("measured and fitted", () => {
  const curve = { title: "Fit", timeUnit: "min", value: "tracer, g/L", readings: [reading] };

  test.each([false, true])("no words on one another, all in the picture (log %s)", (log) => {
    const marked = {
      ...reading,
      marks: [
        { name: "t10", time: 6 },
        { name: "mean", time: 8 },
        { name: "t90", time: 140 },
      ],
    };
    const svg = drawFit({ ...curve, readings: [marked, marked] }, { log });
    expect(collisions(svg)).toEqual([]);
    expect(outside(svg)).toEqual([]);
  });

  test("says units, the file, what was left out, and how many points a log axis cannot show", () => {
    const low = { ...reading, measured: reading.measured.map((v, k) => (k < 3 ? -0.001 : v)) };
    const svg = drawFit({ ...curve, readings: [low] }, { log: true });
    const bottom = logAxis([...low.measured, ...fitted], [1, 0]).domain[0];
    const lost = low.measured.filter((v) => v < bottom).length;
    expect(lost).toBeGreaterThan(2);
    for (const words of [
      "time, min",
      "tracer, g/L",
      "salt.csv",
      "left out: air in the cell",
      `${lost} points at or below the axis not shown`,
    ]) {
      expect(svg).toContain(words);
    }
  });

  test("draws a logger's hundred thousand points in few bytes", () => {
    const n = 100_000;
    const t = Float64Array.from({ length: n }, (_, k) => k);
    const y = t.map((v) => Math.exp(-v / 20_000) + 0.02 * Math.sin(v * v));
    const dense = {
      label: "logger",
      time: t,
      measured: y,
      fitted: t.map((v) => Math.exp(-v / 20_000)),
      residual: t.map((v) => 0.02 * Math.sin(v * v)),
    };
    expect(drawFit({ ...curve, readings: [dense] }).length).toBeLessThan(4e5);
  });

  test("survives values that are no numbers, a constant and one point", () => {
    const odd = { label: "odd", time: [1, 2], measured: [Number.NaN, 3], fitted: [3, 3], residual: [Number.NaN, 0] };
    const one = { label: "one", time: [1], measured: [2], fitted: [2], residual: [0] };
    expect(drawFit({ ...curve, readings: [odd, one] })).not.toMatch(/NaN|Infinity|undefined/);
  });
});

describe("lines with names at their ends", () => {
  const line = (label: string, tau: number): { label: string; x: number[]; y: number[] } => ({
    label,
    x: time,
    y: time.map((t) => Math.exp(-t / tau)),
  });

  test("names stay apart however close the lines end", () => {
    const svg = drawCurves({
      title: "E",
      x: "time, min",
      y: "E, 1/min",
      lines: [line("a", 10), line("b", 11), line("c", 12), line("d", 300)],
    });
    expect(collisions(svg)).toEqual([]);
    expect(outside(svg)).toEqual([]);
  });

  test("a spike says its share and its time", () => {
    const svg = drawCurves({
      title: "E",
      x: "time, min",
      y: "E",
      lines: [{ ...line("out", 10), spikes: [{ x: 15, area: 0.1 }] }],
    });
    expect(svg).toContain("10\u2009% at 15");
  });
});

test("intervals with bounds: words stay apart and inside", () => {
  const row = { value: 82.3, low: 80.1, high: 84.2, text: "82.3 % (80.1 to 84.2)" };
  const of = {
    title: "Conversion",
    quantity: "conversion, %",
    rows: [
      {
        ...row,
        label: "normal",
        under: "better than today: 88 %",
        bounds: { segregated: 82.4, maximumMixedness: 82.3 },
      },
      { ...row, label: "a duty of a rather long name", bounds: { segregated: 95, maximumMixedness: 80 } },
    ],
    reference: { value: 97, label: "required" },
  };
  for (const width of [columnWidth, 640]) {
    const { drawing } = plotIntervals(of, { width });
    expect(collisions(drawing)).toEqual([]);
    expect(outside(drawing)).toEqual([]);
  }
});

describe("axes", () => {
  test("cover their values; a log axis is cut after so many decades", () => {
    const ax = linearAxis([3, 97], [0, 100]);
    expect(ax.domain[0]).toBeLessThanOrEqual(3);
    expect(ax.domain[1]).toBeGreaterThanOrEqual(97);
    expect(logAxis([1e-9, 0.5], [100, 0]).domain).toEqual([1e-4, 1]);
    expect(logAxis([-1, 0], [100, 0]).ticks.every(Number.isFinite)).toBe(true);
  });
});

describe("keeping apart", () => {
  test("keeps the order and the gaps, and moves nothing that fits", () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: -100, max: 100, noNaN: true }), { minLength: 1, maxLength: 12 }),
        (wanted) => {
          const at = separated(
            wanted,
            wanted.map(() => 1),
            wanted.slice(1).map(() => 5),
          );
          for (let k = 1; k < at.length; k++) expect(at[k] - at[k - 1]).toBeGreaterThanOrEqual(5 - 1e-9);
          // least squares with equal weights keeps the mean
          const mean = (v: number[]): number => v.reduce((a, b) => a + b, 0) / v.length;
          expect(mean(at)).toBeCloseTo(mean(wanted), 8);
        },
      ),
    );
    expect(separated([0, 10, 30], [1, 1, 1], [5, 5])).toEqual([0, 10, 30]);
  });

  test("a heavy one yields less", () => {
    const [light, heavy] = separated([0, 0], [1, 9], [10]);
    expect(heavy).toBeCloseTo(1, 9);
    expect(light).toBeCloseTo(-9, 9);
  });
});
