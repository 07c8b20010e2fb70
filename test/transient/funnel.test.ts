import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { networkSettings } from "../../src/reaction/conditions.js";
import { diversionWindows } from "../../src/study/diversion.js";
import { drawsOf } from "../../src/study/draws-of.js";
import { rowsFor } from "../../src/study/sources.js";
import { diversionOf } from "../../src/transient/diversion.js";
import { transientFigures } from "../../src/transient/figures.js";
import { type Funnel, funnelOf } from "../../src/transient/funnel.js";
import { passageOf } from "../../src/transient/passage.js";
import { transient } from "../../src/transient/transient.js";

const second = `chemistry: Second order
format: 1
species: {A: {}}
constants: {k: 0.05 L/mol/min}
reactions: [{makes: {A: -1}, rate: k * A^2}]
`;

function read(body: string, duty: string, chemistry = "") {
  const net = parseNetwork(
    `network: A vessel\nformat: 1\nfeeds: {feed: {flow: 10 L/min ± 3 %, to: lead}}\ncompartments:\n  lead: {kind: tubular, volume: 20 L, to: body}\n  body: {kind: ${body}, to: product}\noutlets: [product]\n`,
    { path: "n.yaml" },
  );
  const found = parseDuty(`duty: D\nformat: 1\n${chemistry}${duty}`, { path: "d.yaml", read: () => second });
  expect([...net.problems, ...found.problems]).toEqual([]);
  if (!net.document || !found.document) throw new Error("unread");
  const { plant } = compile(net.document, networkSettings(found.document));
  if (!plant) throw new Error("no plant");
  return { plant, duty: found.document, network: net.document };
}

const funnel = (...of: Parameters<typeof funnelOf>): Funnel => {
  const found = funnelOf(...of);
  if (typeof found === "string") throw new Error(found);
  return found;
};

describe("limit curve of upsets", () => {
  test("pure mixing in a tank: height (1 - exp(-d/tau)) is what is left to the limit", () => {
    const { plant, duty } = read(
      "stirred, volume: 300 L",
      "feeds: {feed: {A: {from: 1 mol/L, to: 1.3 mol/L, lasting: 5 min}}}\nreport: [time A at product above 1.1 mol/L]",
    );
    const found = funnel(plant, duty, [60, 600, 6000]);
    expect(found.linear).toBe(true);
    for (const { lasting, level } of found.points) {
      expect((level ?? 0) / 1000 - 1).toBeCloseTo(0.1 / -Math.expm1(-lasting / 1800), 5);
    }
  });

  test("downwards there is an end: what is not fed at all for a short while goes unnoticed", () => {
    const { plant, duty } = read(
      "stirred, volume: 300 L",
      "feeds: {feed: {A: {from: 1 mol/L, to: 0.5 mol/L, lasting: 5 min}}}\nreport: [time A at product below 0.9 mol/L]",
    );
    const found = funnel(plant, duty, [60, 600]);
    expect(found.points[0].level).toBeUndefined();
    expect((found.points[1].level ?? 0) / 1000).toBeCloseTo(1 - 0.1 / -Math.expm1(-1 / 3), 5);
  });

  test("second order: the upset at the limit curve just comes to the limit", () => {
    const { plant, duty } = read(
      "stirred, volume: 300 L, repeat: 2",
      "feeds: {feed: {A: {from: 1 mol/L, to: 1.3 mol/L, lasting: 5 min}}}\nreport: [time A at product above 0.55 mol/L]",
      "chemistry: c.yaml\n",
    );
    const found = funnel(plant, duty, [300, 1800]);
    expect(found.linear).toBe(false);
    for (const { lasting, level } of found.points) {
      const feed = duty.feeds.get("feed");
      const course = feed?.courses?.get("A");
      if (!feed || course?.is !== "upset" || level === undefined) throw new Error("no upset");
      const courses = new Map([["A", { ...course, to: { ...course.to, of: () => level }, lasting }]]);
      const run = transient(
        plant,
        duty.chemistry,
        { ...duty, feeds: new Map([["feed", { ...feed, courses }]]) },
        [0, 20_000],
      );
      expect(passageOf(run.look("product"), 1, 0, 20_000).highest.value / 550).toBeCloseTo(1, 4);
    }
  });

  test("what there is no curve for", () => {
    const steady = read(
      "stirred, volume: 300 L",
      "feeds: {feed: {A: 1 mol/L}}\nreport: [time A at product above 1.1 mol/L]",
    );
    expect(funnelOf(steady.plant, steady.duty)).toBe("no-upset");
    const unlimited = read("stirred, volume: 300 L", "feeds: {feed: {A: {from: 1 mol/L, to: 2 mol/L}}}");
    expect(funnelOf(unlimited.plant, unlimited.duty)).toBe("no-limit");
    const beyond = read(
      "stirred, volume: 300 L",
      "feeds: {feed: {A: {from: 1 mol/L, to: 2 mol/L}}}\nreport: [time A at product above 0.9 mol/L]",
    );
    expect(funnelOf(beyond.plant, beyond.duty)).toBe("beyond-already");
  });
});

describe("a diversion window", () => {
  test("from early beginnings to late ends, the analyser's delay on both", () => {
    const draws = Array.from({ length: 101 }, (_, k) =>
      k === 0
        ? []
        : [
            { from: k, to: 200 + k },
            { from: 300 + k, to: 400 + k },
          ],
    );
    expect(diversionOf(draws, { flow: 2, delay: 3 })).toEqual({
      from: 5.95 - 3,
      to: 495.05 + 3,
      touched: 100 / 101,
      volume: 2 * (498.05 - 2.95),
      stillAtEnd: 0,
    });
    expect(diversionOf(draws, { flow: 2, open: 25 })?.stillAtEnd).toBe(0.25);
    expect(diversionOf([[], []], { flow: 2 })).toBeUndefined();
  });

  test("is about as wide as what is known of the flow and the feed makes it", () => {
    const { plant, duty, network } = read(
      "stirred, volume: 300 L",
      "feeds: {feed: {A: {from: 1 mol/L ± 1 %, to: 2 mol/L ± 2 %, start: 3 min, lasting: 20 min}}}\nreport: [time A at product above 1.2 mol/L]",
    );
    const operation = { network, duty, values: {}, kinetics: new Map() };
    const { settings } = drawsOf(network, undefined, 40, 1);
    const [{ window, draws }] = diversionWindows(operation, rowsFor(operation, settings, 1), 0);
    const [{ beyond }] = transientFigures(plant, duty, transient(plant, undefined, duty, [0, 12_000]));
    const span = beyond?.spans[0];
    expect(draws).toBe(40);
    expect(window && span && window.from < span.from && window.from > span.from - 90).toBe(true);
    expect(window && span && window.to > span.to && window.to < span.to + 600).toBe(true);
  });
});
