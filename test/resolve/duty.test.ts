import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import type { Chemistry } from "../../src/model/chemistry.js";
import { dimensions } from "../../src/units/dimension.js";
import { chemistry, readChemistry, readDuty } from "./documents.js";

const made = (text: string): Chemistry => readChemistry(text).found as Chemistry;
const second = made(chemistry("{k: 2 L/mol/min}", "{equation: A + B -> P, rate: k * A * B}"));
const open = made(
  "chemistry: open\nformat: 1\nspecies: {A: {}, P: {}}\nconstants: {k: 2 1/min}\nreactions: [{equation: A -> P, rate: k * A}]\n",
);
const hot = made(readFileSync("shared/chemistry/second-order-hydrolysis.yaml", "utf8"));
const disinfection = made(readFileSync("shared/chemistry/chick-watson.yaml", "utf8"));

const duty = (...lines: string[]): string => `duty: test\nformat: 1\n${lines.join("\n")}\n`;

describe("an operating point", () => {
  const text = duty(
    "chemistry: some.yaml",
    "flows: {feed: 11.5 L/min}",
    "with: {k: 3 L/mol/min ± 20 %, bypass: 5 %}",
    "feeds: {feed: {A: 1 mol/L ± 1 %, B: 1200 mmol/L}, rinse: {}}",
    "report: [conversion of A, conversion of A at north.2, yield of P from A, selectivity of P over B at out, log-removal of A, A at product, t10 at product]",
  );
  const { found, told } = readDuty(text, second);

  test("is read whole, in SI", () => {
    expect(told).toEqual([]);
    expect(found?.feeds.get("feed")?.species.get("B")?.value.of([])).toBeCloseTo(1200, 9);
    expect(found?.feeds.get("feed")?.species.get("A")?.value.sd?.([])).toBeCloseTo(10, 9);
    expect(found?.feeds.get("rinse")?.species.size).toBe(0);
    expect(found?.concentrations[2]).toEqual(dimensions["molar concentration"]);
  });

  test("tells its chemistry's constants from the network's", () => {
    expect([...(found?.with.keys() ?? [])]).toEqual(["k"]);
    expect([...(found?.settings.keys() ?? [])]).toEqual(["bypass"]);
  });

  test("knows its figures", () => {
    expect(found?.report.map(({ what, of, versus, percent, at }) => [what, of, versus, percent, at])).toEqual([
      ["conversion", "A", undefined, undefined, undefined],
      ["conversion", "A", undefined, undefined, "north.2"],
      ["yield", "P", "A", undefined, undefined],
      ["selectivity", "P", "B", undefined, "out"],
      ["log-removal", "A", undefined, undefined, undefined],
      ["concentration", "A", undefined, undefined, "product"],
      ["tracer-time", "", undefined, 10, "product"],
    ]);
  });

  test("without a chemistry only mixes", () => {
    const { found: mixing, told: nothing } = readDuty(
      duty("feeds: {feed: {salt: 2 g/L}}", "report: [salt at product]"),
    );
    expect(nothing).toEqual([]);
    expect(mixing?.concentrations).toEqual([dimensions["mass concentration"]]);
  });
});

describe("what concentrations count", () => {
  test("grams become moles by the molar mass, uncertainty and all", () => {
    const { found, told } = readDuty(
      duty("chemistry: c", "temperature: 25 degC", "feeds: {feed: {ester: 8.811 g/L ± 2 %, base: 0.1 mol/L}}"),
      hot,
    );
    expect(told).toEqual([]);
    const ester = found?.feeds.get("feed")?.species.get("ester")?.value;
    expect(ester?.of([])).toBeCloseTo(100, 9);
    expect(ester?.sd?.([])).toBeCloseTo(2, 9);
  });

  test("an open law takes what is fed, and the rest is counted alike", () => {
    const { found } = readDuty(duty("chemistry: c", "feeds: {feed: {A: 5 mg/L}}"), open);
    expect(found?.concentrations).toEqual([dimensions["mass concentration"], dimensions["mass concentration"]]);
  });

  test("organisms by count, disinfectant by mass", () => {
    const { found, told } = readDuty(
      duty(
        "chemistry: c",
        "feeds: {feed: {organisms: 1000 CFU/mL, disinfectant: 2 mg/L}}",
        "report: [log-removal of organisms]",
      ),
      disinfection,
    );
    expect(told).toEqual([]);
    expect(found?.concentrations).toEqual([dimensions["number concentration"], dimensions["mass concentration"]]);
  });
});

describe("what is wrong is told where it stands", () => {
  const fed = "feeds: {feed: {A: 1 mol/L}}";
  test.each([
    [["feeds: {feed: {C: 1 mol/L}}"], "unknown-place at C"],
    [["feeds: {feed: {A: 1 g/L}}"], "feed-basis at 1 g/L"],
    [["feeds: {feed: {A: 1 L}}"], "wrong-dimension at 1 L"],
    [["feeds: {feed: {A: -1 mol/L}}"], "below-zero at -1 mol/L"],
    [[fed, "flows: {feed: 0 L/min}"], "below-zero at 0 L/min"],
    [[fed, "with: {k: 3 1/min}"], "wrong-dimension at 3 1/min"],
    [[fed, "report: [conversion of C]"], "unknown-place at conversion of C"],
    [[fed, "report: [how much A]"], "bad-report-line at how much A"],
    [[fed, "report: [time A at product above 0.2 kg/L]"], "limit-unit at 0.2 kg/L"],
    [[fed, "temperature: -300 degC"], "bad-number at -300 degC"],
  ])("%j", (lines, expected) => {
    const { found, told } = readDuty(duty("chemistry: c", ...lines), second);
    expect(found).toBeUndefined();
    expect(told).toEqual([expected]);
  });

  test("a chemistry that asks for the temperature gets one or is refused", () => {
    const { told } = readDuty(duty("chemistry: c", "feeds: {feed: {ester: 1 mol/L}}"), hot);
    expect(told).toEqual(["temperature-missing at c"]);
  });

  test("an equation met by grams is a warning where it matters", () => {
    const lines = ["chemistry: c", "feeds: {feed: {A: 1 g/L}}"];
    expect(readDuty(duty(...lines, "report: [conversion of A]"), open).told).toEqual([]);
    const asked = readDuty(duty(...lines, "report: [yield of P from A]"), open);
    expect(asked.told).toEqual(["mass-equation at 1 g/L"]);
    expect(asked.found).toBeDefined();
  });
});
