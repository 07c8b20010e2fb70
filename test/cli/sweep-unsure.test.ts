import { describe, expect, test } from "vitest";
import { at, json } from "./fake.js";

const files = {
  "tank.yaml": `network: Tank
format: 1
parameters: {V: {value: 10 L ± 4 %, between: [5 L, 40 L]}}
feeds: {feed: {flow: 1 L/min ± 3 %, to: tank}}
compartments: {tank: {kind: stirred, volume: V, to: product}}
outlets: [product]
`,
  "known.yaml": `network: Tank of known size
format: 1
feeds: {feed: {flow: 1 L/min ± 3 %, to: tank}}
compartments: {tank: {kind: stirred, volume: 10 L, to: product}}
outlets: [product]
`,
  "duty.yaml": `duty: First order
format: 1
chemistry: chem.yaml
feeds: {feed: {A: 1 mol/L}}
report: [conversion of A]
`,
  "chem.yaml": `chemistry: First order
format: 1
species: {A: {}, P: {}}
constants: {k: 0.1 1/min ± 5 %}
reactions: [{equation: A -> P, rate: k * A}]
`,
  "warm.yaml": `duty: Warm
format: 1
chemistry: warm.chem.yaml
temperature: 350 K ± 1 K
feeds: {feed: {A: 1 mol/L}}
report: [conversion of A]
`,
  "warm.chem.yaml": `chemistry: Warm
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 300 K, value: 0.001 1/min, activation: 80 kJ/mol}}
reactions: [{equation: A -> P, rate: k * A}]
`,
};
/** Nine in ten of a normal distribution lie above its mean less so many standard deviations. */
const z = 1.2815515655;

describe("what moves keeps the ± that it declares", () => {
  const nineInTen = ["--confidence", "90 %"];

  test("a flow with a ± in per cent: k V / Q is above 1.5 with the chance of a difference of normal numbers", async () => {
    const aim = ["--aim", "conversion of A >= 60 %", "--by", "feed.flow", "--between", "0.2 L/min..2 L/min"];
    const { document } = await json(["sweep", "known.yaml", "--duty", "duty.yaml", ...aim, ...nineInTen], { files });
    const found = at(document, "crossings.0.value") as number;
    // k V - 1.5 Q of mean 1 - 1.5 Q; Q keeps its 3 %.
    const off = (1 - 1.5 * found) / Math.hypot(0.05, 1.5 * found * 0.03);
    // The share is known to two standard errors; its density at 90 % is 0.175 for each standard deviation.
    const error = at(document, "crossings.0.shareError") as number;
    expect(error).toBeLessThan(0.02);
    expect(Math.abs(off - z)).toBeLessThan(error / 0.175);
    expect(Math.abs((at(document, "crossings.0.shareMeeting") as number) - 0.9)).toBeLessThan(0.002);
  });

  test("a temperature with a ± in kelvins moves by so many kelvins", async () => {
    const aim = ["--aim", "conversion of A >= 95 %", "--by", "temperature", "--between", "300 K..420 K"];
    const { document } = await json(["sweep", "known.yaml", "--duty", "warm.yaml", ...aim, ...nineInTen], {
      files: { ...files, "known.yaml": files["known.yaml"].replace(" ± 3 %", "") },
    });
    // k(T) tau = 19.
    const exact = 1 / (1 / 300 - (Math.log(19 / 0.01) * 8.314462618) / 80_000);
    expect(Math.abs((at(document, "crossings.0.value") as number) - (exact + z))).toBeLessThan(0.05);
  });

  test("a volume with a ± widens the margin of an aim and the brackets of a sweep", async () => {
    const aim = ["--aim", "conversion of A >= 60 %", "--by", "V"];
    const with4 = await json(["sweep", "tank.yaml", "--duty", "duty.yaml", ...aim, ...nineInTen], { files });
    const sure = { ...files, "tank.yaml": files["tank.yaml"].replace(" ± 4 %", "") };
    const without = await json(["sweep", "tank.yaml", "--duty", "duty.yaml", ...aim, ...nineInTen], { files: sure });
    expect(at(without.document, "crossings.0.value")).toBeCloseTo(16.19, 0);
    const margin = (document: unknown): number => (at(document, "crossings.0.value") as number) - 15;
    // Shares of variance add: 5, 3 and 4 % against 5 and 3 %.
    const ratio = margin(with4.document) / margin(without.document);
    expect(Math.abs(ratio - Math.sqrt(50 / 34))).toBeLessThan(0.1);
    const over = ["--over", "V=15 L..16 L:2"];
    const { document } = await json(["sweep", "tank.yaml", "--duty", "duty.yaml", ...over], { files });
    const [low, high] = at(document, "points.0.figures.0.interval95") as number[];
    // d ln(x / (1 - x)) = dx / (x (1 - x)), x = 0.6
    const sd = 0.24 * Math.sqrt(0.05 ** 2 + 0.03 ** 2 + 0.04 ** 2);
    expect(Math.abs((high - low) / (2 * 1.96 * sd) - 1)).toBeLessThan(0.1);
  });
});
