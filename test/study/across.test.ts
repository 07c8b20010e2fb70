import { expect, test } from "vitest";
import { random } from "../../src/numerics/random.js";
import { acrossOf } from "../../src/study/across.js";
import { networkOf, trialOf } from "../fit/load.js";

const tank = networkOf(`network: n
format: 1
constants: {total: 100 L}
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: total, repeat: 2, to: out}}
outlets: [out]
`);

/** Two equal tanks of 100 L together. */
const day = (title: string, flow: number, seed: number, volume = 100, more = "") => {
  const draw = random(seed);
  const tau = volume / flow;
  const c = (t: number): number => (t < 0 ? 0 : ((50 * 4 * t) / (flow * tau * tau)) * Math.exp((-2 * t) / tau));
  const rows = Array.from({ length: 240 }, (_, i) => ((i - 20) * tau) / 30);
  return trialOf(
    `trial: ${title}
format: 1
flows: {feed: ${flow} L/min}
${more}injection: {at: feed, pulse: 50 g, start: 0 min}
readings: [{at: out, file: l.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}]
`,
    () => `t,c\n${rows.map((t) => `${t},${c(t) + 0.002 * draw.normal()}\n`).join("")}`,
  );
};

test("trials of a network are held against one another by what their days differ in", () => {
  const trials = [
    day("summer", 10, 1, 100, "conditions: {season: summer}\n"),
    day("again", 10, 2, 100, "conditions: {season: summer}\n"),
    day("winter", 10, 3, 100, "conditions: {season: winter}\n"),
    day("low level", 10, 4, 80, "with: {total: 80 L}\nconditions: {season: summer}\n"),
    day("fast", 20, 5, 100, "conditions: {season: summer}\n"),
  ];
  const across = acrossOf(tank, trials, 1);
  const of = (contrast: string) => across?.contrasts.find((c) => c.contrast === contrast);
  const names = (contrast: string) => of(contrast)?.pairs.map((p) => p.trials.map((t) => t.title).join(" and "));
  expect(names("repeat")).toEqual(["summer and again"]);
  expect(names("flow")).toEqual(["summer and fast", "again and fast"]);
  expect(of("conditions")?.pairs.flatMap((p) => p.differs)).toContain("season (summer, winter)");
  expect(of("conditions")?.pairs.flatMap((p) => p.differs)).toContain("total (not said, 80 L)");
  expect(across?.contrasts.map((c) => c.verdict)).toEqual(across?.contrasts.map(() => "coincide"));
  expect(across?.findings.map((f) => f.code)).toEqual(["repeats-agree", "shape-scales"]);
  const [slow, fast] = of("flow")?.pairs[0].volumes ?? [];
  expect(Math.abs((slow?.value ?? 0) - 0.1)).toBeLessThan(3 * (slow?.sd ?? 0));
  expect(Math.abs((fast?.value ?? 0) - 0.1)).toBeLessThan(3 * (fast?.sd ?? 0));
  expect(acrossOf(tank, trials.slice(0, 1), 1)).toBeUndefined();
});
