import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { tracerPlant } from "../../src/simulate/tracer-plant.js";
import { transient } from "../../src/transient/transient.js";

const decay = `chemistry: Decay
format: 1
species: {A: {}}
constants: {k: 0.03 1/min}
reactions: [{makes: {A: -1}, rate: k * A}]
`;

const bodies: Record<string, string> = {
  stirred: "stirred, volume: 200 L",
  chain: "stirred, volume: 200 L, repeat: 4, backflow: 3 L/min",
  "stirred with a corner": "stirred, volume: 200 L, stagnant: {volume: 60 L, exchange: 1 L/min}",
  tubular: "tubular, volume: 200 L",
  dispersed: "dispersed, volume: 200 L, peclet: 20",
  "dispersed past pockets": "dispersed, volume: 200 L, peclet: 8, stagnant: {volume: 50 L, exchange: 2 L/min}",
  laminar: "laminar, volume: 200 L",
  "cascade of a fraction": "cascade, volume: 200 L, tanks: 1.4",
  "cascade of whole tanks": "cascade, volume: 200 L, tanks: 6",
};

function plantOf(network: string) {
  const { document, problems } = parseNetwork(`network: A vessel\nformat: 1\n${network}`, { path: "n.yaml" });
  expect(problems).toEqual([]);
  const plant = document && compile(document).plant;
  if (!plant) throw new Error("no plant");
  return plant;
}

function dutyOf(chemistry: string, text: string) {
  const { document, problems } = parseDuty(`duty: A duty\nformat: 1\n${chemistry}${text}`, {
    path: "d.yaml",
    read: () => decay,
  });
  expect(problems).toEqual([]);
  if (!document) throw new Error("unread");
  return document;
}

const times = Float64Array.from({ length: 41 }, (_, k) => 60 * 3 * k);

/** A start-up, as the tracer engines have it: a step into the feed, times what is fed. */
function compare(network: string, limit: number): void {
  const plant = plantOf(network);
  for (const rate of [0, 0.03 / 60]) {
    const duty = dutyOf(rate > 0 ? "chemistry: c.yaml\n" : "", "feeds: {feed: {A: 2 mol/L}}");
    const run = transient(plant, duty.chemistry, duty, times, { at: [] });
    expect(run.stopped).toBeUndefined();
    const seen = tracerResponse(
      rate > 0 ? tracerPlant(plant, { loss: rate }) : plant,
      { at: "feed", form: "step" },
      times,
    );
    seen.readings.forEach(({ value }, o) => {
      value.forEach((f, k) => {
        expect(Math.abs(run.outlets[o].values[k] / 2000 - f)).toBeLessThan(limit);
      });
    });
    for (const c of run.balance?.closure ?? [1]) expect(Math.abs(c)).toBeLessThan(1e-9);
  }
}

describe("linear networks agree with the tracer engines", () => {
  test.each(Object.entries(bodies))("%s", (_, body) => {
    compare(
      `feeds: {feed: {flow: 10 L/min, to: lead}}
compartments:
  lead: {kind: tubular, volume: 30 L, to: {body: 80 %, product: rest}}
  body: {kind: ${body}, to: tank}
  tank: {kind: stirred, volume: 50 L, to: product}
outlets: [product]
`,
      1e-8,
    );
  });

  test("a recycle with a tube in it", () => {
    compare(
      `feeds: {feed: {flow: 10 L/min, to: mix}}
compartments:
  mix: {kind: junction, to: pipe}
  pipe: {kind: tubular, volume: 90 L, to: tank}
  tank: {kind: stirred, volume: 150 L, to: {mix: 12 L/min, product: rest}}
outlets: [product]
`,
      1e-8,
    );
  });

  test("a recycle with laminar flow in it", () => {
    compare(
      `feeds: {feed: {flow: 10 L/min, to: mix}}
compartments:
  mix: {kind: junction, to: pipe}
  pipe: {kind: laminar, volume: 90 L, to: tank}
  tank: {kind: stirred, volume: 150 L, to: {mix: 12 L/min, product: rest}}
outlets: [product]
`,
      1e-8,
    );
  });

  test("a circle of tubes alone", () => {
    compare(
      `feeds: {feed: {flow: 10 L/min, to: mix}}
compartments:
  mix: {kind: junction, to: pipe}
  pipe: {kind: tubular, volume: 90 L, to: {back: 5 L/min, product: rest}}
  back: {kind: tubular, volume: 35 L, to: mix}
outlets: [product]
`,
      1e-8,
    );
  });
});

describe("what is there at the start leaves as a wash-out", () => {
  test.each(Object.entries(bodies))("%s", (_, body) => {
    const plant = plantOf(`feeds: {feed: {flow: 10 L/min, to: body}}
compartments:
  body: {kind: ${body}, to: product}
outlets: [product]
`);
    const duty = dutyOf("", "feeds: {feed: {A: 0 mol/L}}\ncontents: {all: {A: 3 mol/L}}");
    const run = transient(plant, undefined, duty, times, { at: [] });
    const seen = tracerResponse(plant, { at: "feed", form: "step" }, times);
    seen.readings[0].value.forEach((f, k) => {
      expect(Math.abs(run.outlets[0].values[k] / 3000 - (1 - f))).toBeLessThan(1e-8);
    });
    for (const c of run.balance?.closure ?? [1]) expect(Math.abs(c)).toBeLessThan(1e-9);
  });
});
