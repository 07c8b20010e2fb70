import { describe, expect, test } from "vitest";
import { checkTrial } from "../../src/check/trial.js";
import { evaluateNames } from "../../src/compile/evaluate.js";
import { parseTrial } from "../../src/parse/trial.js";
import { collector } from "../../src/problems/report.js";
import { runChecks } from "../../src/simulate/checks.js";
import { codes, type Library, network, networkOf, parse, plantOf } from "./parts.js";

/** A stirred tank with an impeller loop whose flow follows the throughput; part of its volume is dead. */
const core = network(`constants: {total: 100 L}
parameters: {dead: {value: 20 L, between: [1 L, 50 L]}, turns: {value: 3, between: [1, 9]}}
requires: [dead < total]
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments:
  tank: {kind: stirred, volume: total - dead, to: {loop: turns * feed.flow, out: rest}}
  loop: {kind: tubular, volume: 5 L, to: tank}
  still: {kind: dead, volume: dead}
outlets: [out]`);

/** Two inlets, two outlets. */
const settler = network(`feeds:
  sludge: {flow: 3 L/min, to: bowl}
  wash: {flow: 1 L/min, to: bowl}
compartments:
  bowl: {kind: stirred, volume: 40 L, to: {clear: 70 %, thick: rest}}
outlets: [clear, thick]`);

const files = { "core.yaml": core, "parts/settler.yaml": settler };
const main = (lines: string): Library => ({ ...files, "main.yaml": network(lines) });

const flow = (library: Library, from: string, to: string): number =>
  60_000 * (plantOf(library).streams.find((s) => s.from === from && s.to === to)?.flow ?? Number.NaN);

describe("names", () => {
  const library = main(`parameters: {d: {value: 10 L, between: [5 L, 20 L]}}
feeds: {feed: {flow: 5 L/min, to: {a: 40 %, b: rest}}}
compartments:
  a: {kind: part, use: core.yaml, with: {dead: d}, to: out}
  b: {kind: part, use: core.yaml, repeat: 2, to: out}
outlets: [out]`);

  test("what a part leaves open is the parent's, to be fitted and set; the same in all repeats", () => {
    const { names } = networkOf(library);
    const roles = Object.fromEntries(names.map((n) => [n.name, n.role]));
    expect(roles).toMatchObject({
      ...{ "a.turns": "parameter", "a.total": "constant", "b.dead": "parameter", "b.turns": "parameter" },
      // What is bound moves with what it is bound to, not by itself.
      "a.dead": "constant",
    });
    expect(names.find((n) => n.name === "b.dead")?.between).toHaveLength(2);
    const set = plantOf(library, { d: 0.015, "b.dead": 0.03 });
    const volume = (name: string) => set.nodes.filter((n) => n.name === name).map((n) => n.volume);
    expect(volume("a.tank")[0]).toBeCloseTo(0.085, 15);
    for (const name of ["b.1.tank", "b.2.tank"]) expect(volume(name)[0]).toBeCloseTo(0.07, 15);
  });

  test("values follow the flow that arrives", () => {
    const env = (settings = {}) => {
      const network = networkOf(library);
      const values = evaluateNames(network, settings);
      return Object.fromEntries(network.names.map((n) => [n.name, values[n.slot] * 60_000]));
    };
    expect(env()["a.feed.flow"]).toBeCloseTo(2, 12);
    expect(env()["b.feed.flow"]).toBeCloseTo(3, 12);
    expect(env({ "feed.flow": 10 / 60_000 })["b.feed.flow"]).toBeCloseTo(6, 12);
    expect(flow(library, "b.2.tank", "b.2.loop")).toBeCloseTo(9, 12);
  });

  test("expressions of the parent reach inside by dots", () => {
    const reaching = main(`feeds: {feed: {flow: 5 L/min, to: a}}
compartments:
  a: {kind: part, use: core.yaml, to: {out: {tail: 2 * a.feed.flow / 5, out: rest}}}
  tail: {kind: stirred, volume: a.total / 2 + a.dead, to: out}
outlets: [out]`);
    expect(plantOf(reaching).nodes.find((n) => n.name === "tail")?.volume).toBeCloseTo(0.07, 15);
    expect(flow(reaching, "a.out", "tail")).toBeCloseTo(2, 12);
  });

  test("a name bound further out goes through to parts inside parts", () => {
    const outer = network(`constants: {half: 50 L}
feeds: {in: {flow: 1 L/min, to: inner}}
compartments: {inner: {kind: part, use: ../core.yaml, with: {total: half}, to: out}}
outlets: [out]`);
    const nested = (binding: string) => ({
      ...main(`feeds: {feed: {flow: 1 L/min, to: box}}
compartments: {box: {kind: part, use: parts/outer.yaml, with: {${binding}}, to: out}}
outlets: [out]`),
      "parts/outer.yaml": outer,
    });
    const volume = (binding: string) =>
      plantOf(nested(binding)).nodes.find((n) => n.name === "box.inner.tank")?.volume ?? Number.NaN;
    expect(volume("half: 60 L")).toBeCloseTo(0.04, 15);
    expect(volume("inner.dead: 30 L")).toBeCloseTo(0.02, 15);
    expect(codes(parse(nested("inner.total: 30 L")).problems)).toEqual(["unknown-binding main.yaml inner.total"]);
  });
});

describe("inside a recycle", () => {
  const around = (part: string, to: string) =>
    main(`feeds: {feed: {flow: 6 L/min, to: a}}
compartments: {a: {kind: part, use: ${part}, to: ${to}}}
outlets: [out]`);

  test("what enters a part with one way in and one out leaves it, so the flow is known before its own streams", () => {
    const library = around("core.yaml", "{out: {a: 50 %, out: rest}}");
    expect(flow(library, "a.feed", "a.tank")).toBeCloseTo(12, 12);
    expect(flow(library, "a.tank", "a.loop")).toBeCloseTo(36, 12);
  });

  test("a flow that would have to be known to be known is refused", () => {
    const split = network(`feeds: {feed: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: 1 L, to: {back: 0.2 * feed.flow, on: rest}}}
outlets: [back, on]`);
    const library = { ...around("split.yaml", "{back: a, on: out}"), "split.yaml": split };
    expect(parse(library).problems.map((p) => p.code)).toEqual(["circular-flow"]);
    const shares = { ...library, "split.yaml": split.replace("0.2 * feed.flow", "20 %") };
    expect(flow(shares, "a.feed", "a.tank")).toBeCloseTo(7.5, 12);
  });
});

describe("ports", () => {
  const settled = (feed: string, to: string, more = "") =>
    main(`feeds: {feed: {flow: 4 L/min, to: ${feed}}}
compartments: {s: {kind: part, use: parts/settler.yaml, to: ${to}${more}}}
outlets: [out, waste]`);
  const both = "{s.sludge: 75 %, s.wash: rest}";
  const mapped = "{clear: out, thick: {waste: 20 %, out: rest}}";

  test("inlets by dots, outlets by map", () => {
    expect(flow(settled(both, mapped), "s.thick", "waste")).toBeCloseTo(0.24, 12);
  });

  test.each([
    ["an inlet that is not there", settled("{s.sludge: 75 %, s.wsh: rest}", mapped), ["unknown-port main.yaml s.wsh"]],
    ["an inlet left out", settled("s.sludge", mapped), ["inlet-unfed main.yaml s"]],
    ["a bare name where there are two", settled("s", mapped), ["port-open main.yaml s"]],
    [
      "the inside by a stream",
      settled("{s.sludge: 75 %, s.wash: 5 %, s.bowl: rest}", mapped),
      ["unknown-port main.yaml s.bowl"],
    ],
    ["an outlet that is not there", settled(both, "{clear: out, thik: waste}"), ["unknown-port main.yaml thik"]],
    ["an outlet left out", settled(both, "{clear: out}"), ["outlet-unmapped main.yaml s"]],
    ["a bare name for two outlets", settled(both, "out"), ["port-open main.yaml out"]],
    [
      "a share for a place",
      settled(both, "{clear: 30 %, thick: rest}"),
      ["not-a-place main.yaml 30 %", "not-a-place main.yaml rest"],
    ],
    ["repeats without one way", settled(both, mapped, ", repeat: 2"), ["repeat-ports main.yaml 2"]],
  ])("%s", (_, library, expected) => {
    expect(codes(parse(library).problems)).toEqual(expected);
  });

  test("the name of a part stands for its one way in and its one way out", () => {
    const library = main(`feeds: {feed: {flow: 5 L/min, to: a}}
compartments: {a: {kind: part, use: core.yaml, repeat: 2, to: out}}
outlets: [out]
checks: [{volume: a, equals: 210 L}, {volume: a.1, equals: 105 L}, {flow: a, equals: 5 L/min}, {flow: a.2.tank, equals: 20 L/min}]`);
    const plant = plantOf(library);
    const node = (name: string) => plant.nodes.findIndex((n) => n.name === name);
    expect([plant.entry.get("a"), plant.exit.get("a")]).toEqual([node("a.1.feed"), node("a.2.out")]);
    expect(runChecks(plant).map((c) => c.holds)).toEqual([true, true, true, true]);
    const trial = parseTrial(
      "trial: T\nformat: 1\ninjection: {at: a, pulse: 1 g}\nreadings: [{at: a}, {at: a.1}, {at: a.2.tank}, {at: a.3}]\n",
    );
    const { report, problems } = collector();
    if (trial.document) checkTrial(plant.network, trial.document, report);
    expect(codes(problems)).toEqual(["unknown-place trial.yaml a.3"]);
  });
});

test("problems inside a part tell the way to it, each use by itself", () => {
  const library = main(`feeds: {feed: {flow: 5 L/min, to: a}}
compartments:
  a: {kind: part, use: core.yaml, to: b}
  b: {kind: part, use: core.yaml, with: {total: 10 L}, to: out}
outlets: [out]`);
  const { problems } = parse(library);
  expect(problems.map((p) => `${p.code}: ${p.message}`)).toEqual([
    "requirement-broken: the start values break 'dead < total': left is 20 L, right 10 L",
  ]);
  const use = problems[0].at.source.usedBy;
  expect(use && [use.as, use.at.source.path, use.at.source.text.slice(0, use.at.from).split("\n").length]).toEqual([
    "part",
    "main.yaml",
    6,
  ]);
});

test("parts that multiply are stopped before they fill the memory", () => {
  const twice = (next: string) =>
    network(`feeds: {feed: {flow: 1 L/min, to: a}}
compartments: {a: {kind: part, use: ${next}, repeat: 100, to: out}}
outlets: [out]`);
  const library = { ...files, "main.yaml": twice("b.yaml"), "b.yaml": twice("c.yaml"), "c.yaml": twice("core.yaml") };
  expect(parse(library).problems.map((p) => p.code)).toContain("too-many-bodies");
  const fan = (next: string) =>
    network(`feeds: {feed: {flow: 1 L/min, to: p0}}
compartments:
${Array.from({ length: 9 }, (_, i) => `  p${i}: {kind: part, use: ${next}, to: ${i < 8 ? `p${i + 1}` : "out"}}`).join("\n")}
outlets: [out]`);
  const deep = Object.fromEntries(Array.from({ length: 12 }, (_, i) => [`f${i}.yaml`, fan(`f${i + 1}.yaml`)]));
  const found = parse({ ...deep, "f12.yaml": core, "main.yaml": fan("f0.yaml") }).problems.map((p) => p.code);
  expect(new Set(found)).toContain("too-many-bodies");
});

test("one file may be placed many times, and many files once", () => {
  const placed = (n: number, use: (i: number) => string): string =>
    main(`feeds: {feed: {flow: 5 L/min, to: p0}}
compartments:
${Array.from({ length: n }, (_, i) => `  p${i}: {kind: part, use: ${use(i)}, to: ${i < n - 1 ? `p${i + 1}` : "out"}}`).join("\n")}
outlets: [out]`)["main.yaml"];
  const small = network(`feeds: {feed: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: 1 L, to: out}}
outlets: [out]`);
  const twelve = parse({ "small.yaml": small, "main.yaml": placed(1200, () => "small.yaml") });
  expect(codes(twelve.problems)).toEqual([]);
  const many = Object.fromEntries(Array.from({ length: 1001 }, (_, i) => [`s${i}.yaml`, small]));
  const { problems } = parse({ ...many, "main.yaml": placed(1001, (i) => `s${i}.yaml`) });
  expect(problems.map((p) => p.code)).toContain("too-many-files");
});

test.each(["total", "dead", "turns"])("a constant '%s' of the parent is not that of its part", (name) => {
  const library = main(`constants: {${name}: 7 L}
feeds: {feed: {flow: 5 L/min, to: a}}
compartments: {a: {kind: part, use: core.yaml, to: b}, b: {kind: stirred, volume: ${name}, to: out}}
outlets: [out]`);
  expect(plantOf(library).nodes.find((n) => n.name === "a.tank")?.volume).toBeCloseTo(0.08, 15);
});
