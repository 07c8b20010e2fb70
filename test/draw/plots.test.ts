import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { plotBars } from "../../src/draw/bars.js";
import { plotCurves } from "../../src/draw/curves.js";
import { columnsOf } from "../../src/draw/plotted.js";
import { plotProfiles } from "../../src/draw/profiles.js";
import { plotRegions, regionEdge } from "../../src/draw/regions.js";
import { plotResiduals } from "../../src/draw/residuals.js";
import { random } from "../../src/numerics/random.js";

const axis = (words: string, value: number, standardError: number) => ({
  words,
  value,
  standardError,
  interval: [value - 2 * standardError, value + 2 * standardError] as const,
});

describe("regions of pairs", () => {
  test("hold 95 % of a normal pair where the degrees of freedom are many", () => {
    const source = random(11);
    const pair = { x: axis("a, L", 5, 2), y: axis("b, min", -1, 0.3), correlation: -0.8 };
    const edge = regionEdge(pair, 1e6);
    const reach = Math.sqrt(-2 * Math.log(0.05)); // chi-squared with two: -2 ln 0.05
    let inside = 0;
    for (let k = 0; k < 4000; k++) {
      const [u, v] = [source.normal(), source.normal()];
      if (Math.hypot(u, v) <= reach) inside++;
    }
    expect(inside / 4000).toBeCloseTo(0.95, 1);
    expect(Math.max(...edge.x)).toBeCloseTo(5 + reach * 2, 4);
    expect(Math.min(...edge.y)).toBeCloseTo(-1 - reach * 0.3, 2);
    for (let k = 0; k < edge.x.length; k++) {
      const [u, v] = [(edge.x[k] - 5) / 2, (edge.y[k] + 1) / 0.3];
      const form = (u * u - 2 * -0.8 * u * v + v * v) / (1 - 0.64);
      expect(form).toBeCloseTo(reach * reach, 4);
    }
  });

  test("grow where there are few degrees of freedom: F(0.95; 2, 10) is 4.103 (tables of F, from memory)", () => {
    const pair = { x: axis("a", 0, 1), y: axis("b", 0, 1), correlation: 0 };
    expect(Math.max(...regionEdge(pair, 10).x)).toBeCloseTo(Math.sqrt(2 * 4.103), 3);
  });

  test("bear pairs that are one", () => {
    const pair = { x: axis("a", 1, 1), y: axis("b", 1, 1), correlation: 1.0000001 };
    expect(plotRegions({ title: "t", pairs: [pair], freedom: 3 }).drawing).not.toMatch(/NaN|undefined/);
  });
});

describe("profiles", () => {
  const value = Array.from({ length: 21 }, (_, k) => 5 + (k - 10) / 10);
  const panel = { words: "a, L", value, interval: [4, 6] as const, through: [true, true] as const };
  const lines = (deviation: number[]): string[][] => {
    const { drawing } = plotProfiles({ title: "t", profiles: [{ ...panel, deviation }] });
    return ["curve", "curve second"].map((c) =>
      [...(new RegExp(`class="${c}" d="([^"]+)"`).exec(drawing)?.[1] ?? "").matchAll(/[-\d.]+ [-\d.]+/g)].map(
        (m) => m[0],
      ),
    );
  };
  test("where linear theory holds, the curve lies on its parabola; where it does not, beside it", () => {
    const [straight, theory] = lines(value.map((v) => 1.96 * (v - 5)));
    const at = (points: string[], x: number): number => {
      const near = points.map((p) => p.split(" ").map(Number)).sort((a, b) => Math.abs(a[0] - x) - Math.abs(b[0] - x));
      return near[0][1];
    };
    const xs = straight.map((p) => Number(p.split(" ")[0]));
    for (const x of xs.slice(1, -1)) expect(Math.abs(at(straight, x) - at(theory, x))).toBeLessThan(9);
    const [bent, tangent] = lines(value.map((v) => 1.96 * (v - 5) + 1.2 * (v - 5) ** 2));
    expect(at(bent, xs[1]) - at(tangent, xs[1])).toBeGreaterThan(20);
  });
  test("bear an open side, a step and a single value", () => {
    const odd = [
      {
        ...panel,
        deviation: value.map(() => 0.01),
        interval: [undefined, undefined] as const,
        through: [false, false] as const,
      },
      { words: "b", value: [1], deviation: [0], interval: [1, 1] as const, through: [false, false] as const },
    ];
    const { drawing } = plotProfiles({ title: "t", profiles: odd });
    expect(drawing).not.toMatch(/NaN|undefined|Infinity/);
    expect(drawing).toContain("a, L: open to open");
  });
});

describe("residuals", () => {
  const reading = (n: number) => ({
    label: "outlet",
    time: Array.from({ length: n }, (_, k) => k),
    value: Array.from({ length: n }, (_, k) => Math.sin(k)),
    autocorrelation: [0.5, -0.1],
  });
  test("say how many lie beyond, and how neighbours hang together", () => {
    const { drawing, data } = plotResiduals({ title: "t", timeUnit: "min", readings: [reading(40)] });
    expect(drawing).toContain("40 residuals, 0 beyond 1.96 standard deviations, neighbours correlate by 0.50");
    expect("plots" in data && data.plots.map((p) => p.y.words)).toEqual([
      "residual, standard deviations",
      "autocorrelation",
    ]);
  });
  test("bear one reading and none", () => {
    for (const n of [0, 1]) {
      const few = { ...reading(n), autocorrelation: [] };
      expect(plotResiduals({ title: "t", timeUnit: "min", readings: [few] }).drawing).not.toMatch(
        /NaN|undefined|Infin/,
      );
    }
  });
});

test("bars end at their shares of the axis", () => {
  const { drawing } = plotBars({
    title: "t",
    quantity: "share, %",
    rows: [50, 25].map((p) => ({ label: `${p}`, percent: p })),
  });
  const widths = [...drawing.matchAll(/class="liquid"[^>]* width="([\d.]+)"/g)].map((m) => Number(m[1]));
  expect(widths[0] / widths[1]).toBeCloseTo(2, 2);
});

describe("the numbers behind a drawing", () => {
  test("series over the same x share its column, others have their own", () => {
    const x = [1, 2];
    const { data } = plotCurves({
      title: "t",
      x: "time, min",
      y: "c, g/L",
      points: { x: [5, 6, 7], y: [1, 1, 1] },
      lines: [
        { label: "a", x, y: [3, 4], band: { low: [2, 3], high: [4, 5] } },
        { label: "b", x, y: [5, 6] },
      ],
    });
    if (!("plots" in data)) throw new Error("no plots");
    const { head, columns } = columnsOf(data);
    expect(head).toEqual([
      "time, min of measured",
      "measured, g/L",
      "time, min of a and a, 2.5 % and a, 97.5 % and b",
      "a, g/L",
      "a, 2.5 %, g/L",
      "a, 97.5 %, g/L",
      "b, g/L",
    ]);
    expect(columns.map((c) => c.length)).toEqual([3, 3, 2, 2, 2, 2, 2]);
  });

  test("its axes tell where a value stands: px along the box and back is the value", () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: 0.01, max: 1e4, noNaN: true }), { minLength: 2, maxLength: 30 }),
        fc.boolean(),
        (y, log) => {
          const x = y.map((_, k) => k);
          const { data, drawing } = plotCurves({ title: "t", x: "x", y: "y", lines: [{ label: "l", x, y }] }, { log });
          if (!("plots" in data)) throw new Error("no plots");
          const [{ box, x: ax, y: ay }] = data.plots;
          const first = /class="curve" d="M([\d.]+) ([\d.]+)/.exec(drawing)!.slice(1).map(Number);
          const share = ay.log
            ? (Math.log(Math.max(y[0], ay.from)) - Math.log(ay.from)) / (Math.log(ay.to) - Math.log(ay.from))
            : (y[0] - ay.from) / (ay.to - ay.from);
          if (log && y[0] <= ay.from) return;
          expect(first[0]).toBeCloseTo(box.x - (ax.from / (ax.to - ax.from)) * box.width, 1);
          expect(first[1]).toBeCloseTo(box.y + box.height * (1 - share), 1);
        },
      ),
      { numRuns: 60 },
    );
  });
});
