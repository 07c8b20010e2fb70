import { expect, test } from "vitest";
import { at, backmix, type Json, json } from "./fake.js";

/**
 * Truth: one tank of 100 L at 10 L/min. Two rivals fit it alike: a tank with a bypass that is nothing, and a tank with dead
 * water that is none; a change that each takes otherwise makes the decision flip.
 */
const times = Array.from({ length: 40 }, (_, i) => i + 1);
const wiggle = (i: number): number => 0.004 * Math.sin(7 * i * i);
const csv = `t,c\n${times.map((t, i) => `${t},${0.5 * Math.exp(-t / 10) + wiggle(i)}`).join("\n")}\n`;

const files = {
  "study.yaml": `study: Which remedy?
format: 1
rivals: [plain.yaml, row.yaml]
trials: [pulse.yaml]
duties: [duty.yaml]
changes: [larger.yaml, faster.yaml]
seed: 3
`,
  "plain.yaml": `network: One tank
format: 1
constants: {added: 0 L, factor: 1}
parameters: {size: {value: 90 L, between: [10 L, 500 L]}}
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: size + added, to: out}}
outlets: [out]
`,
  // The same curve by another name; here what is added lies where no flow goes.
  "row.yaml": `network: One tank beside a dead space
format: 1
constants: {added: 0 L, factor: 1}
parameters: {size: {value: 80 L, between: [10 L, 500 L]}}
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: size * factor, to: out}, corner: {kind: dead, volume: 10 L + added}}
outlets: [out]
`,
  "pulse.yaml": `trial: Pulse
format: 1
injection: {at: feed, pulse: 50 g}
readings: [{at: out, file: pulse.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}]
`,
  "pulse.csv": csv,
  "duty.yaml": `duty: Normal
format: 1
chemistry: decay.yaml
feeds: {feed: {A: 1 mol/L}}
report: [log-removal of A, A at out]
`,
  "decay.yaml": `chemistry: Decay
format: 1
species: {A: {}}
constants: {k: 0.1 1/min ± 5 %}
reactions: [{makes: {A: -1}, rate: k * A}]
`,
  "larger.yaml": `network: A larger tank
format: 1
change: {constants: {added: 100 L}}
`,
  "faster.yaml": `network: A deeper tank
format: 1
change: {constants: {factor: 1.5}}
`,
};

test("a decision that flips between rivals of equal standing is said, with chances averaged over them", async () => {
  const { status, document } = await json(["study", "study.yaml"], { files });
  expect(status).toBe(0);
  const weights = [0, 1].map((k) => at(document, `ranking.${k}.weight`) as number);
  expect(weights[0]).toBeCloseTo(0.5, 3);
  const choice = (k: number) => at(document, `decisions.0.choices.${k}`) as Json;
  const by = Object.fromEntries([0, 1].map((k) => [at(choice(k), "network"), at(choice(k), "change")]));
  expect(by).toEqual({ "plain.yaml": "A larger tank", "row.yaml": "A deeper tank" });
  expect(at(document, "decisions.0.flips")).toBe(true);
  expect((at(document, "decisions.0.averaged") as unknown as Json[]).length).toBe(2);
  // What adds nothing in one network is no better there: about half of the chance is left.
  expect(at(document, "decisions.0.averaged.0.probabilityBetter")).toBeCloseTo(0.5, 1);
  const { out } = await backmix(["study", "study.yaml"], { files });
  expect(out.replace(/\s+/g, " ")).toContain("the decision flips between networks that fit about as well");
  // They show the same curve wherever the flow goes.
  for (const t of at(document, "telling") as unknown as Json[]) expect(at(t, "apart")).toBeLessThan(0.5);
});

test("the end that hurts is told one-sided: a kill at least, what is left at most", async () => {
  const { document } = await json(["study", "study.yaml"], { files });
  expect(at(document, "predictions.0.oneSided95.bound")).toBe("at least");
  const [low] = at(document, "predictions.0.interval95") as number[];
  const lower = at(document, "predictions.0.oneSided95.value") as number;
  expect(lower).toBeGreaterThan(low);
  expect(lower).toBeLessThan(at(document, "predictions.0.value") as number);
  expect(at(document, "predictions.1.oneSided95.bound")).toBe("at most");
});
