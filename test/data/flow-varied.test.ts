import { expect, test } from "vitest";
import { readMoments } from "../../src/data/moments.js";
import { parseTrial } from "../../src/parse/trial.js";
import { readingOf } from "./helpers.js";

/** A tank of 110 L whose flow follows Q(t): after a pulse of 50 g, c = M / V exp(-volume passed / V), exactly. */
test("a logged flow: recovery and effective volume over what has passed, times as they were", () => {
  const flow = (t: number) => 10 + 4 * Math.sin(t / 8);
  const passed = (t: number) => 10 * t + 32 * (1 - Math.cos(t / 8));
  const clock = Array.from({ length: 401 }, (_, i) => i / 4);
  const files: Record<string, string> = {
    "q.csv": `t,q\n${clock.map((t) => `${t},${flow(t)}`).join("\n")}`,
    "c.csv": `t,c\n${clock.map((t) => `${t},${(50 / 110) * Math.exp(-passed(t) / 110)}`).join("\n")}`,
  };
  const column = (name: string, unit: string) =>
    `time: {column: t, unit: min}, value: {column: ${name}, unit: ${unit}}`;
  const { document } = parseTrial(
    `trial: T\nformat: 1\nflows: {feed: {file: q.csv, ${column("q", "L/min")}}}\ninjection: {at: feed, pulse: 50 g}\nreadings: [{at: out, file: c.csv, ${column("c", "g/L")}}]\n`,
    { path: "t.yaml", read: (path) => files[path] },
  );
  if (!document) throw new Error("no trial");
  const result = readMoments(document, { volume: { value: 0.11 } });
  const [reading] = result.readings;
  expect(reading.recovery.value).toBeCloseTo(1, 3);
  expect(Math.abs((reading.indices["effective-volume"].value ?? 0) / 0.11 - 1)).toBeLessThan(0.002);
  expect(reading.indices["mean-over-tau"].value).toBeCloseTo(1, 2);
  expect(reading.indices.holdback.value).toBeCloseTo(Math.exp(-1), 2);
  const codes = result.findings.map((f) => f.code);
  expect(codes).toContain("flow-varied");
  expect(codes).toContain("well-mixed");
  for (const code of ["recovery-low", "recovery-high", "mean-early", "mean-late"]) expect(codes).not.toContain(code);
  // The mean in time is that of this day: the integral of t Q c is another.
  expect(Math.abs((reading.mean.value ?? 0) / 660 - 1)).toBeGreaterThan(0.01);
});

test("an injection after midnight, in a log that began before it", () => {
  const two = (x: number) => String(Math.floor(x)).padStart(2, "0");
  const clock = (min: number) => `${two((min / 60) % 24)}:${two(min % 60)}:00`;
  const begins = 23 * 60 + 51;
  const points = Array.from({ length: 71 }, (_, i): [string, number] => {
    const since = i - 10;
    return [clock(begins + i), since < 0 ? 0 : Math.exp(-since / 10) / 10];
  });
  const read = (start: string) =>
    readingOf(points, { injection: `{at: feed, pulse: 10 g, start: ${start}}`, time: '{column: t, format: "h:m:s"}' });
  expect((read("00:01:00").mean.value ?? 0) / 60).toBeCloseTo(10, 0);
  // Five minutes before the first row stays before it.
  expect((read("23:46:00").mean.value ?? 0) / 60).toBeCloseTo(25, 0);
});
