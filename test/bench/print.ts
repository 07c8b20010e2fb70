import type { Planned } from "./cases.js";
import type { Standing } from "./contest.js";

/** A table for people: who, seconds, the whole process, memory, error, how often faster than the best peer. */
export function standingsTable({ title, target, error }: Planned, standings: readonly Standing[]): string {
  const rows = [
    ["", "seconds", "process", "MB", error ?? "", "best peer / it"],
    ...standings.map((s) => [
      `${s.own ? "backmix: " : ""}${s.name}`,
      s.failed ? "-" : figures(s.seconds),
      figures(s.whole),
      s.memory === undefined ? "" : s.memory.toFixed(0),
      s.error === undefined ? "" : s.error.toExponential(1),
      s.failed ?? (s.timesFaster === undefined ? "" : s.timesFaster.toPrecision(3)),
    ]),
  ];
  const widths = rows[0].map((_, j) => Math.max(...rows.slice(0, j === 5 ? 1 : undefined).map((r) => r[j].length)));
  const lines = rows.map((r) =>
    r
      .map((cell, j) => (j === 0 ? cell.padEnd(widths[j]) : cell.padStart(widths[j])))
      .join("  ")
      .trimEnd(),
  );
  return [`  ${title}; to reach: ${target}`, ...lines.map((l) => `    ${l}`)].join("\n");
}

const figures = (x: number | undefined): string =>
  x === undefined ? "" : x >= 100 ? x.toFixed(0) : x >= 0.001 ? x.toPrecision(3) : x.toExponential(2);

/** b of the line log y = a + b log x through the points, by least squares. */
export function fittedExponent(points: readonly (readonly [number, number])[]): number {
  const x = points.map(([n]) => Math.log(n));
  const y = points.map(([, s]) => Math.log(s));
  const mean = (v: readonly number[]): number => v.reduce((s, e) => s + e, 0) / v.length;
  const [mx, my] = [mean(x), mean(y)];
  const along = x.reduce((s, e, i) => s + (e - mx) * (y[i] - my), 0);
  return along / x.reduce((s, e) => s + (e - mx) ** 2, 0);
}
