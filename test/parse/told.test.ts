import { expect, test } from "vitest";
import { parseAny } from "../../src/parse/any.js";
import { parseStudy } from "../../src/parse/study.js";
import { tidy } from "../../src/tidy/tidy.js";

const tank = "network: Tank\nformat: 1\nfeeds: {f: {flow: 1 L/min, to: a}}\n";
const body = "compartments: {a: {kind: stirred, volume: 1 L, to: o}}\noutlets: [o]\n";
const loop =
  "network: Loop\nformat: 1\ncompartments:\n  a: {kind: stirred, volume: 1 L, to: {b: 1 L/min}}\n  b: {kind: stirred, volume: 1 L, to: {a: 1 L/min}}\n";

const problems = (text: string, files: Record<string, string> = {}) =>
  parseAny(text, { path: "t.yaml", read: (path) => files[path] }).problems;

test("a calibration by slope and by standards is told once", () => {
  const trial = (calibration: string) =>
    problems(
      `trial: T\nformat: 1\ninjection: {at: f, pulse: 1 g}\nreadings: [{at: o, calibration: ${calibration}}]\n`,
    ).map((p) => p.code);
  const points = "points: {file: s.csv, reading: {column: r, unit: mV}, value: {column: c, unit: g/L}}";
  expect(trial(`{${points}, rise: 3 mV}`)).toEqual(["calibration-twice"]);
  expect(trial("{rise: 3 mV}")).toEqual(["missing-key"]);
});

test("what a share is asked for is called as everywhere", () => {
  const [problem] = problems(`${tank}${body}checks: [{volume: a, equals: 1 L, within: [1 %]}]\n`);
  expect(problem.message).toContain("share (like 15 %)");
});

test("a closed vessel has no feed to name", () => {
  const trial = "trial: T\nformat: 1\nvessel: v.yaml\nflows: {left: 1 L/min}\ninjection: {at: a, pulse: 1 g}\n";
  const found = problems(`${trial}readings: [{at: b}]\n`, { "v.yaml": loop });
  expect(found.map((p) => p.code)).toEqual(["unknown-place"]);
  expect(found[0].fix).toBe("take it out: the network has no feed");
});

test("`basis` stands after `format`", () => {
  const text = `network: Tank\nformat: 1\nnotes: Demo.\n\noutlets: [o]\nbasis: mass\n`;
  expect(JSON.stringify(tidy(text))).toContain("format: 1\\nbasis: mass\\nnotes");
});

test("rivals of one title are told apart by their files", () => {
  const files: Record<string, string> = { "a.yaml": tank + body, "b.yaml": (tank + body).replace("1 L,", "2 L,") };
  const titles = (rivals: string) =>
    parseStudy(`study: S\nformat: 1\nrivals: [${rivals}]\ntrials: [t.yaml]\n`, {
      path: "s.yaml",
      read: (path) =>
        path === "t.yaml"
          ? "trial: T\nformat: 1\ninjection: {at: f, pulse: 1 g}\nreadings: [{at: o, file: o.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}]\n"
          : path === "o.csv"
            ? "t,c\n0,0\n1,1\n2,0.5\n3,0.2\n"
            : files[path],
    }).document?.rivals.map((r) => r.network.title);
  expect(titles("a.yaml, b.yaml")).toEqual(["Tank (a.yaml)", "Tank (b.yaml)"]);
  expect(titles("a.yaml")).toEqual(["Tank"]);
});
