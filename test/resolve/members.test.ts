import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { Plant } from "../../src/compile/plant.js";
import { parseChemistry } from "../../src/parse/chemistry.js";
import { parseDuty } from "../../src/parse/duty.js";
import { steadyState } from "../../src/reaction/steady.js";
import { runChecks } from "../../src/simulate/checks.js";
import { moments } from "../../src/simulate/moments.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { codes, network, parse, plantOf } from "./parts.js";

const runs = { numRuns: 40, seed: 20261201 };
const times = Float64Array.from({ length: 12 }, (_, i) => 10 * 2 ** i);

/** A chain of n tanks with streams and exchanges at some of its members: as a `repeat`, and written out by hand. */
const chains = fc
  .record({
    n: fc.integer({ min: 2, max: 6 }),
    back: fc.constantFrom(0, 30, 150),
    held: fc.boolean(),
    first: fc.integer({ min: 1, max: 90 }),
    enters: fc.array(fc.nat(5), { minLength: 1, maxLength: 3 }),
    trades: fc.nat(5),
  })
  .map(({ n, back, held, first, enters, trades }) => {
    const ways = [...new Set(enters.map((k) => (k % n) + 1))].filter((k) => k > 1);
    const share = (100 - first) / Math.max(1, ways.length);
    const partner = (trades % n) + 1;
    const to = (name: (k: number) => string): string =>
      `{${[`${name(1)}: rest`, ...ways.map((k) => `${name(k)}: ${share} %`)].join(", ")}}`;
    const document = (name: (k: number) => string, bodies: string, member = name): string =>
      network(
        [
          `feeds: {feed: {flow: 6 L/min, to: ${to(name)}}, side: {flow: 1 L/min, to: ${name(n)}}}`,
          "compartments:",
          bodies,
          `  tank: {kind: stirred, volume: 7 L, to: {${name(partner)}: 25 %, out: rest}, exchange: {${member(partner)}: 0.7 L/min}}`,
          "outlets: [out]",
        ].join("\n"),
      );
    const still = (k: number): string => (held ? `, stagnant: {volume: ${3 / k} L, exchange: ${0.6 / k} L/min}` : "");
    const repeat = `  chain: {kind: stirred, volume: 30 L, repeat: ${n}, backflow: ${back} %, to: tank${still(1)}}`;
    // What goes forward between members k and k + 1: what entered so far.
    const recycled = 7 / 3;
    const into = (k: number): number =>
      (k === 1 ? (6 * (100 - share * ways.length)) / 100 : ways.includes(k) ? (6 * share) / 100 : 0) +
      (k === n ? 1 : 0) +
      (k === partner ? recycled : 0);
    let forward = 0;
    const byHand = Array.from({ length: n }, (_, i) => {
      const k = i + 1;
      forward += into(k);
      const next = k < n ? `t${k + 1}` : "tank";
      const exchange = k < n ? `, exchange: {t${k + 1}: ${((forward * back) / 100).toFixed(15)} L/min}` : "";
      return `  t${k}: {kind: stirred, volume: ${30 / n} L, to: ${next}${still(n)}${exchange}}`;
    });
    return {
      chain: document(
        (k) => (k === 1 ? "chain" : `chain.${k}`),
        repeat,
        (k) => `chain.${k}`,
      ),
      tanks: document((k) => `t${k}`, byHand.join("\n")),
      n,
    };
  });

const close = (a: ArrayLike<number>, b: ArrayLike<number>, within: number): void => {
  expect(a.length).toBe(b.length);
  for (let i = 0; i < a.length; i++) {
    expect(Math.abs(a[i] - b[i])).toBeLessThanOrEqual(within * Math.max(1, Math.abs(a[i])));
  }
};

const step = (plant: Plant, at: string, extra: readonly string[]) =>
  tracerResponse(plant, { at, form: "step" }, times, { at: extra }).readings.map((r) => r.value);

describe("a repeat whose members are entered one by one", () => {
  test("is what n tanks are that are written out: curves, moments, reaction", () => {
    const chemistry =
      "chemistry: C\nformat: 1\nspecies: {A: {}, B: {}}\nconstants: {k: 0.05 L/mol/min}\nreactions: [{equation: 2 A -> B, rate: k * A^2}]\n";
    const duty = parseDuty("duty: D\nformat: 1\nchemistry: c.yaml\nfeeds: {feed: {A: 1 mol/L}, side: {A: 2 mol/L}}\n", {
      read: () => chemistry,
    }).document;
    const laws = parseChemistry(chemistry).document;
    if (!duty || !laws) throw new Error("no duty");
    fc.assert(
      fc.property(chains, ({ chain, tanks, n }) => {
        const [a, b] = [chain, tanks].map((text) => plantOf({ "main.yaml": text }));
        const members = (name: (k: number) => string) => Array.from({ length: n }, (_, i) => name(i + 1));
        const [c, d] = [
          step(
            a,
            "feed",
            members((k) => `chain.${k}`),
          ),
          step(
            b,
            "feed",
            members((k) => `t${k}`),
          ),
        ];
        c.forEach((curve, i) => {
          close(curve, d[i], 1e-9);
        });
        const [p, q] = [a, b].map((plant) => moments(plant, plant.feeds[0].node)[plant.outlets[0].node]);
        close([p.mean, p.variance], [q.mean, q.variance], 1e-9);
        const [x, y] = [a, b].map((plant) => {
          return steadyState(plant, laws, duty).outlets.flatMap((o) => [...o.concentrations]);
        });
        close(x, y, 1e-7);
      }),
      { ...runs, numRuns: 25 },
    );
  });

  const shown = network(
    `feeds: {feed: {flow: 4 L/min, to: {chain: 50 %, chain.2: rest}}}
compartments:
  chain: {kind: stirred, volume: 30 L, repeat: 3, to: tank}
  tank: {kind: stirred, volume: 3 L, to: product, exchange: {chain.2: 1 L/min}}
outlets: [product]
checks:
  - {flow: chain.1, equals: 2 L/min}
  - {flow: chain.2, equals: 4 L/min}
  - {flow: chain, equals: 4 L/min}
  - {volume: chain.2, equals: 10 L}`,
  );

  test("its checks speak of members, and streams lead to them by name", () => {
    const plant = plantOf({ "main.yaml": shown });
    expect(runChecks(plant).map((c) => c.holds)).toEqual([true, true, true, true]);
    expect(plant.streams.map((s) => `${s.leaves} ${s.enters}`)).toEqual([
      "feed chain",
      "feed chain.2",
      "chain tank",
      "tank product",
      "tank chain.2",
    ]);
  });

  test("the first member may be called by its number or by the name of the row", () => {
    const [a, b] = ["chain: 50 %", "chain.1: 50 %"].map((to) =>
      plantOf({ "main.yaml": shown.replace("chain: 50 %", to) }),
    );
    expect([...a.flow]).toEqual([...b.flow]);
  });

  test.each([
    ["{chain.4: 50 %, chain: rest}", "tank", ["unknown-place main.yaml chain.4"]],
    ["chain.3", "tank", ["unreachable main.yaml chain"]],
    ["{chain: 50 %, chain.2: rest}", "{tank: 50 %, chain.0: rest}", ["unknown-place main.yaml chain.0"]],
  ])("to: %s, then %s", (feed, on, problems) => {
    const text = shown.replace("{chain: 50 %, chain.2: rest}", feed).replace("to: tank", `to: ${on}`);
    expect(codes(parse({ "main.yaml": text.replace(", exchange: {chain.2: 1 L/min}", "") }).problems)).toEqual(
      problems,
    );
  });

  test("backflow and exchange reach the members before the first that is entered", () => {
    const entered = shown.replace("{chain: 50 %, chain.2: rest}", "chain.3");
    const problems = (change: (text: string) => string) => codes(parse({ "main.yaml": change(entered) }).problems);
    expect(problems((t) => t.replace("repeat: 3", "repeat: 3, backflow: 1 L/min"))).toEqual([]);
    expect(problems((t) => t)).toEqual(["unreachable main.yaml chain"]); // the first, before the exchange
    expect(problems((t) => t.replace("exchange: {chain.2", "exchange: {chain.1"))).toEqual([]);
  });
});

describe("repeats of a part that are entered one by one", () => {
  const part = (lines: string) =>
    network(
      `constants: {total: 100 L, renewal: 0.15 * feed.flow, held: 0.2 * total}
parameters: {turns: {value: 3, between: [1, 9]}}
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments:
  tank: {kind: stirred, volume: 0.6 * total, to: {loop: turns * feed.flow, out: rest}, exchange: {corner: renewal}}
  corner: {kind: stirred, volume: held}
${lines}
outlets: [out]`,
    );
  const core = part("  loop: {kind: tubular, volume: 0.2 * total, to: tank}");
  const inner = part(
    "  loop: {kind: part, use: core.yaml, with: {total: 0.2 * total, renewal: 0.1 * feed.flow}, to: tank}",
  );
  const whole = (to: string, bodies: string): string =>
    network(
      `parameters: {size: {value: 80 L, between: [10 L, 200 L]}}
feeds: {feed: {flow: 10 L/min, to: ${to}}}
compartments:
${bodies}
  after: {kind: stirred, volume: 5 L, to: {product: rest, ${to.includes("row.3") ? "row.3" : "c"}: 20 %}}
outlets: [product]`,
    );
  const line = (name: string, to: string, more = "") =>
    `  ${name}: {kind: part, use: core.yaml, with: {total: size}, to: ${to}${more}}`;
  const repeated = whole("{row: 30 %, row.2.feed: rest, row.3: 10 %}", line("row", "after", ", repeat: 3"));
  const apart = whole("{a: 30 %, b: rest, c: 10 %}", [line("a", "b"), line("b", "c"), line("c", "after")].join("\n"));

  test.each([
    ["a tank with a loop", core],
    ["a part in a part", inner],
  ])("are what as many parts are: %s", (_, text) => {
    const files = { "core.yaml": core, "use.yaml": text };
    const [a, b] = [repeated, apart].map((main) =>
      plantOf({ ...files, "main.yaml": main.replaceAll("core.yaml", "use.yaml") }),
    );
    const map = (name: string) => name.replace("row.1", "a").replace("row.2", "b").replace("row.3", "c");
    const flows = ({ nodes }: Plant) => new Map(nodes.map((n) => [map(n.name), [n.inflow, n.volume]]));
    expect([...flows(a).keys()]).toEqual([...flows(b).keys()]);
    for (const [name, [flow, volume]] of flows(a)) close([flow, volume], flows(b).get(name) ?? [], 1e-12);
    const [x, y] = [a, b].map((plant) => moments(plant, plant.feeds[0].node)[plant.outlets[0].node]);
    close([x.mean, x.variance], [y.mean, y.variance], 1e-10);
  });

  test("what follows the flow is each one's own, all else is one for all", () => {
    const { network: whole } = plantOf({ "core.yaml": core, "main.yaml": repeated });
    expect(whole.names.map((n) => n.name)).toEqual([
      "size",
      "feed.flow",
      "row.total",
      "row.1.renewal",
      "row.held",
      "row.turns",
      "row.2.renewal",
      "row.3.renewal",
      "row.1.feed.flow",
      "row.2.feed.flow",
      "row.3.feed.flow",
    ]);
    const set = (turns: number) => plantOf({ "core.yaml": core, "main.yaml": repeated }, { "row.turns": turns });
    const loops = (plant: Plant) => plant.streams.filter((s) => s.to.endsWith(".loop")).map((s) => s.flow);
    expect(loops(set(6)).map((q, i) => q / loops(set(3))[i])).toEqual([2, 2, 2]);
  });

  test.each([
    ["{row: 50 %, row.4: rest}", ["unknown-port main.yaml row.4"]],
    ["{row: 50 %, row.2.tank: rest}", ["unknown-port main.yaml row.2.tank"]],
    ["row.2", ["inlet-unfed main.yaml row"]],
  ])("to: %s", (to, problems) => {
    const main = whole(to, line("row", "product", ", repeat: 3")).replace(/ {2}after.*\n/, "");
    expect(codes(parse({ "core.yaml": core, "main.yaml": main }).problems)).toEqual(problems);
  });
});
