import { describe, expect, test } from "vitest";
import { judgeAcross } from "../../src/data/across-rules.js";
import { acrossTrials } from "../../src/data/across-trials.js";
import { thresholds } from "../../src/data/thresholds.js";
import { random } from "../../src/numerics/random.js";
import { parseUnit } from "../../src/units/parse.js";
import type { Unit } from "../../src/units/unit.js";
import { type Day, dayOf, exactDay, type Scenario, scenarios, tanks } from "./across-simulated.js";

const litres = parseUnit("L") as Unit;
const folder = "../../shared/reference/measured";
const draws = 6;

/** Codes told of a scenario, one list per draw of the noise. */
function toldOf({ days }: Pick<Scenario, "days">, share: number, seed: number, times: number): string[][] {
  const noise = random(seed);
  const exact = days.map(exactDay);
  return Array.from({ length: times }, () => {
    const across = acrossTrials(days.map((day, i) => dayOf(day, exact[i], share, noise, `T${i}`)));
    return across ? judgeAcross(across, undefined).findings.map((f) => f.code) : [];
  });
}

/** The page is made anew by `npx vitest run test/data/across -u`. */
test("several trials: how often what they say together is right", async () => {
  const rows: string[] = [];
  const rates = { hit: [] as number[], alarm: [] as number[] };
  for (const share of [0.003, 0.02]) {
    for (const scenario of scenarios) {
      const told = toldOf(scenario, share, 41, draws);
      const codes = new Map<string, number>();
      for (const all of told) for (const c of all) codes.set(c, (codes.get(c) ?? 0) + 1);
      const right = [...codes].reduce((sum, [code, n]) => sum + (scenario.true.includes(code) ? n : 0), 0);
      const wrong = [...codes].reduce((sum, [code, n]) => sum + (scenario.true.includes(code) ? 0 : n), 0);
      if (scenario.true.length > 0) rates.hit.push((100 * right) / draws);
      rates.alarm.push((100 * wrong) / draws);
      const words = [...codes]
        .sort((a, b) => b[1] - a[1])
        .map(([code, n]) => `${scenario.true.includes(code) ? `**${code}**` : code} ${n}`);
      const none = told.filter((all) => all.length === 0).length;
      rows.push(
        `| ${scenario.name} | ${100 * share} % | ${[...words, ...(none > 0 ? [`not told ${none}`] : [])].join(", ")} |`,
      );
    }
  }
  const mean = (v: readonly number[]): number => v.reduce((a, b) => a + b, 0) / v.length;
  const page = `### How often what several trials say together is right

Tests on vessels of 100 L with known truth, read 250 times over ten to twenty mean times with white noise of a share of the peak, no baseline; ${draws} draws each
(test/data/across.test.ts, seed 41; thresholds version ${thresholds.version}). Of ${draws} sets of tests, in how many what is told; bold where it is true. Over all: told where true
${mean(rates.hit).toFixed(0)} of 100, told where not true ${mean(rates.alarm).toFixed(1)} of 100.

| tests | noise | told |
|---|---|---|
${rows.join("\n")}
`;
  expect(mean(rates.alarm)).toBeLessThan(5);
  expect(mean(rates.hit)).toBeGreaterThan(70);
  await expect(page).toMatchFileSnapshot(`${folder}/across.md`);
}, 120_000);

describe("several trials", () => {
  const across = (days: readonly Day[], share: number, seed: number) => {
    const noise = random(seed);
    return acrossTrials(days.map((day, i) => dayOf(day, exactDay(day), share, noise, `T${i}`)));
  };

  test("noise seldom makes one curve two: the chance is even over repeated pairs", () => {
    const day: Day = { vessel: tanks(3, 1), flow: 1 };
    const chances = Array.from({ length: 40 }, (_, k) => across([day, day], 0.01, 500 + k)?.contrasts[0]?.chance ?? 1);
    expect(chances.filter((c) => c <= 0.05).length).toBeLessThanOrEqual(5);
    expect(chances.filter((c) => c <= 0.5).length).toBeLessThanOrEqual(28);
  });

  test("repeats must agree in time and in what was recovered, and both figures are told", () => {
    const told = (other: Day): string[] => {
      const found = across([{ vessel: tanks(3, 1), flow: 1 }, other], 0.003, 17);
      if (!found) return [];
      const { findings } = judgeAcross(found, litres);
      return findings.map((f) => `${f.code}: ${f.evidence}`);
    };
    expect(told({ vessel: tanks(3, 1, 98), flow: 1 })).toEqual([
      expect.stringMatching(/^repeats-agree: .*flow times mean/),
    ]);
    expect(told({ vessel: tanks(3, 1, 85), flow: 1 })).toEqual([
      expect.stringMatching(/^repeats-differ: .*flow times mean (99|100)[^ ]* L ± [^ ]+ and 8[45][^ ]* L ± /),
    ]);
    expect(told({ vessel: tanks(3, 1), flow: 1, lost: 0.15 })).toEqual([
      expect.stringMatching(/^repeats-differ: .*recovered (99|100)[^ ]* ± [^ ]+ % and (84|85)/),
    ]);
  });

  test("the order of the trials and the unit of time change nothing but names", () => {
    const days: Day[] = [1, 2].map((flow) => ({ vessel: tanks(3, flow), flow }));
    const noise = random(3);
    const made = days.map((day, i) => dayOf(day, exactDay(day), 0.003, noise, `T${i}`));
    const [there, back] = [acrossTrials(made), acrossTrials([...made].reverse())];
    const facts = (a: typeof there) =>
      a?.contrasts.map(({ verdict, pairs }) => [verdict, pairs[0].trials.map((t) => t.title), pairs[0].apart.value]);
    expect(facts(back)).toEqual(facts(there));
  });

  test("a curve that has not come down is left out, with its reason", () => {
    const day: Day = { vessel: tanks(1, 1), flow: 1 };
    const exact = exactDay(day);
    const until = exact.time.findIndex((t) => t > 80);
    const cut = { time: exact.time.subarray(0, until), curve: exact.curve.subarray(0, until) };
    const noise = random(1);
    const found = acrossTrials([dayOf(day, exact, 0.003, noise, "whole"), dayOf(day, cut, 0.003, noise, "cut")]);
    expect(found?.contrasts).toEqual([]);
    expect(found?.left.map(({ trial, why }) => `${trial.title}: ${why}`)).toEqual([
      expect.stringMatching(/^cut: .*(not seen|come down)/),
    ]);
  });

  test("flows and conditions that change together are not told apart", () => {
    const days: Day[] = [
      { vessel: tanks(3, 1), flow: 1, conditions: { season: "summer" } },
      { vessel: tanks(8, 2), flow: 2, conditions: { season: "winter" } },
    ];
    const found = across(days, 0.003, 9);
    expect(found?.contrasts.map((c) => c.contrast)).toEqual(["several"]);
    const { findings, not } = judgeAcross(found as NonNullable<typeof found>, undefined);
    expect(findings).toEqual([]);
    expect(not[0]).toMatch(/the flow, season \(summer, winter\) changed together; they do differ/);
  });

  test("tests that scatter by themselves hide a flow that makes no more of it", () => {
    const days: Day[] = [
      { vessel: tanks(3, 1), flow: 1 },
      { vessel: tanks(4, 1), flow: 1 },
      { vessel: tanks(3, 2), flow: 2 },
    ];
    const found = across(days, 0.003, 9);
    const verdicts = Object.fromEntries(found?.contrasts.map((c) => [c.contrast, c.verdict]) ?? []);
    expect(verdicts.repeat).toBe("differ");
    expect(verdicts.flow).not.toBe("differ");
  });
});
