import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import type { Difference } from "../../src/diff/difference.js";
import { figuresOf } from "../../src/diff/figures.js";
import { diffNetworks, type NetworkDiff } from "../../src/diff/network.js";
import { valueWords } from "../../src/diff/words.js";
import { type NetworkDocument, parseNetwork } from "../../src/parse/network.js";
import { scribble, seeded } from "../tidy/scribble.js";
import { shipped } from "../tidy/shipped.js";

function network(text: string): NetworkDocument {
  const { document, problems } = parseNetwork(text);
  expect(problems.filter((p) => p.severity === "error")).toEqual([]);
  return document as NetworkDocument;
}

const diff = (a: string, b: string): NetworkDiff => diffNetworks(network(a), network(b));

/** Without places, to compare. */
const said = ({ differences }: NetworkDiff): Omit<Difference, "lineBefore" | "lineAfter">[] =>
  differences.map(({ lineBefore: _, lineAfter: __, ...rest }) => rest);

const vessel = `network: Vessel
format: 1
constants:
  total: 1000 L ± 1 %
parameters:
  bypass: {value: 10 %, between: [0 %, 60 %]}
  held: {value: 200 L, between: [5 L, 480 L]}
requires: [held < total]
feeds:
  feed: {flow: 10 L/min, to: {first: rest, product: bypass}}
compartments:
  first: {kind: stirred, volume: 300 L, to: second}
  second: {kind: stirred, volume: 300 L, to: bulk}
  bulk: {kind: stirred, volume: total - held - 600 L, to: product, exchange: {corner: 1.5 L/min}}
  corner: {kind: stirred, volume: held}
outlets: [product]
checks:
  - {volume: all, equals: 1000 L}
`;

describe("no difference in meaning", () => {
  test.each([
    ["itself", vessel],
    [
      "other units",
      vessel.replace("total: 1000 L", "total: 1 m3").replace("1.5 L/min", "90 L/h").replace("10 %, b", "0.1, b"),
    ],
    ["a spread said otherwise", vessel.replace("± 1 %", "+/- 10 L")],
    ["a sum in another order", vessel.replace("held < total", "held + 0 L < total").replace("held + 0 L", "held")],
    ["a requirement turned round", vessel.replace("held < total", "total > held")],
    ["all by way of a rest", vessel.replace("to: second}", "to: {second: rest}}")],
    ["all by way of a share", vessel.replace("to: second}", "to: {second: 100 %}}")],
    [
      "an exchange written on the other side",
      vessel
        .replace(", exchange: {corner: 1.5 L/min}", "")
        .replace("volume: held}", "volume: held, exchange: {bulk: 1.5 L/min}}"),
    ],
    ["notes", vessel.replace("format: 1", "format: 1\nnotes: As built.")],
    ["words about a parameter", vessel.replace("60 %]}", "60 %], about: what slips by}")],
  ])("%s", (_, other) => expect(said(diff(vessel, other))).toEqual([]));

  test("terms and factors in any order", () => {
    const a = vessel.replace("1.5 L/min", "0.1 * feed.flow * 2 + 1 L/min");
    const b = vessel.replace("1.5 L/min", "1 L/min + 2 * (feed.flow * 0.1)");
    expect(said(diff(a, b))).toEqual([]);
  });

  test("shares that a rest makes up", () => {
    const a = vessel
      .replace("product: bypass", "product: 25 %")
      .replace("  bypass: {value: 10 %, between: [0 %, 60 %]}\n", "");
    expect(said(diff(a, a.replace("first: rest", "first: 75 %")))).toEqual([]);
  });

  const networks = shipped
    .map((file) => readFileSync(file, "utf8"))
    .flatMap((text) => parseNetwork(text).document ?? []);
  test("however a network is typed", () => {
    expect(networks.length).toBeGreaterThan(3);
    fc.assert(
      fc.property(fc.constantFrom(...networks), fc.integer(), (n, seed) => {
        const again = network(scribble(n.tree, seeded(seed)).text);
        expect(diffNetworks(n, again).differences).toEqual([]);
      }),
      { numRuns: 40 },
    );
  });
});

describe("what changed", () => {
  const one = (other: string): object => {
    const all = said(diff(vessel, other));
    expect(all).toHaveLength(1);
    return all[0];
  };

  test("a moved volume", () => {
    expect(
      one(vessel.replace("first: {kind: stirred, volume: 300 L", "first: {kind: stirred, volume: 0.25 m3")),
    ).toEqual({ what: "changed", of: "compartment", name: "first", key: "volume", before: "300 L", after: "0.25 m3" });
  });
  test("bounds", () => {
    expect(one(vessel.replace("[0 %, 60 %]", "[0 %, 0.5]"))).toEqual({
      what: "changed",
      of: "parameter",
      name: "bypass",
      key: "between",
      before: "[0 %, 60 %]",
      after: "[0 %, 0.5]",
    });
  });
  test("a rule in place of the number that it gives", () => {
    expect(one(vessel.replace("1.5 L/min", "0.15 * feed.flow"))).toEqual({
      what: "changed",
      of: "exchange",
      name: "bulk <> corner",
      key: "flow",
      before: "1.5 L/min",
      after: "0.15 * feed.flow",
    });
  });
  test("a rerouted stream", () => {
    expect(one(vessel.replace("to: second}", "to: {second: rest, first: 20 %}}"))).toEqual({
      what: "changed",
      of: "compartment",
      name: "first",
      key: "to",
      before: "second",
      after: "{second: rest, first: 20 %}",
    });
  });
  test("a parameter that became a constant", () => {
    const other = vessel
      .replace("  bypass: {value: 10 %, between: [0 %, 60 %]}\n", "")
      .replace("total: 1000 L ± 1 %", "total: 1000 L ± 1 %\n  bypass: 10 %");
    expect(said(diff(vessel, other)).map((d) => d.key)).toEqual(["role", "between"]);
  });
  test("a kind, a number of tanks", () => {
    const tubes = vessel.replace("first: {kind: stirred", "first: {kind: tubular");
    expect(one(tubes)).toMatchObject({ key: "kind", before: "stirred", after: "tubular" });
    const chain = vessel.replace("first: {kind: stirred", "first: {kind: stirred, repeat: 2");
    expect(one(chain)).toMatchObject({ name: "first", key: "repeat", after: "2" });
  });
  test("statements", () => {
    expect(said(diff(vessel, vessel.replace("equals: 1000 L", "equals: 1000 L, within: 20 %")))).toEqual([
      { what: "added", of: "check", name: "", after: "volume all equals 1000 L within 20 %" },
      { what: "removed", of: "check", name: "", before: "volume all equals 1000 L within 0.1 %" },
    ]);
    const other = vessel.replace("requires: [held < total]", "requires: [held < total, held < 400 L]");
    expect(one(other)).toEqual({ what: "added", of: "requirement", name: "", after: "held < 400 L" });
  });
  test("what is new and what is gone", () => {
    const other = vessel
      .replace(
        "  second: {kind: stirred, volume: 300 L, to: bulk}\n",
        "  extra: {kind: tubular, volume: 20 L, to: bulk}\n",
      )
      .replace("to: second}", "to: extra}");
    expect(said(diff(vessel, other)).map(({ what, name }) => `${what} ${name}`)).toEqual([
      "changed first",
      "added extra",
      "removed second",
    ]);
  });
});

describe("renames", () => {
  const rename = (text: string, pairs: Readonly<Record<string, string>>): string =>
    Object.entries(pairs).reduce(
      (t, [from, to]) => t.replace(new RegExp(`(?<![\\w-])${from}(?![\\w-])`, "g"), to),
      text,
    );
  test("of one body", () => {
    expect(said(diff(vessel, rename(vessel, { corner: "pocket" })))).toEqual([
      { what: "renamed", of: "compartment", name: "pocket", was: "corner" },
    ]);
  });
  test("of everything, twins in a row included", () => {
    const pairs = {
      first: "one",
      second: "two",
      corner: "pocket",
      bulk: "main",
      held: "kept",
      bypass: "slip",
      total: "all-in",
      feed: "inlet",
      product: "out",
    };
    const all = said(diff(vessel, rename(vessel, pairs)));
    expect(all.every((d) => d.what === "renamed")).toBe(true);
    expect(Object.fromEntries(all.map((d) => [d.was, d.name]))).toEqual(pairs);
  });
  test("not where more differs", () => {
    const other = rename(vessel, { corner: "pocket" }).replace("1.5 L/min", "2 L/min");
    expect(
      said(diff(vessel, other))
        .map((d) => d.what)
        .sort(),
    ).toEqual(["added", "added", "removed", "removed"]);
  });
  test("figures follow the names", () => {
    const [a, b] = [network(vessel), network(rename(vessel, { first: "one", second: "two" }))];
    const { matching } = diffNetworks(a, b);
    const figures = figuresOf(compile(a).plant as Plant, compile(b).plant as Plant, matching);
    expect(figures.length).toBeGreaterThan(10);
    expect(figures.every((f) => f.same)).toBe(true);
  });
});

test("flows and space times before and after, each in the unit of its file", () => {
  const [a, b] = [network(vessel), network(vessel.replace("flow: 10 L/min", "flow: 1.2 m3/h"))];
  const { matching } = diffNetworks(a, b);
  const figures = figuresOf(compile(a).plant as Plant, compile(b).plant as Plant, matching);
  const through = figures.find((f) => f.name === "first>second");
  expect(through?.before?.value).toBeCloseTo(9e-3 / 60, 12);
  expect(through?.after?.value).toBeCloseTo(18e-3 / 60, 12);
  const time = figures.find((f) => f.of === "space time" && f.name === "all");
  expect(time?.before?.unit.name).toBe("min");
  expect(time?.after?.unit.name).toBe("h");
  expect((time?.before?.value ?? 0) / (time?.after?.value ?? 1)).toBeCloseTo(2, 12);
  expect(figures.filter((f) => f.of === "volume").every((f) => f.same)).toBe(true);
});

describe("parts", () => {
  const core = `network: Core
format: 1
constants: {v: 8 L}
feeds: {x: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: v, to: y}}
outlets: [y]
`;
  const read = () => core;
  const parsed = (lines: string): NetworkDocument => {
    const text = `network: Row\nformat: 1\nfeeds: {f: {flow: 6 L/min, to: a}}\ncompartments:\n${lines}\noutlets: [out]\n`;
    const { document, problems } = parseNetwork(text, { path: "row.yaml", read });
    expect(problems.filter((p) => p.severity === "error")).toEqual([]);
    return document as NetworkDocument;
  };
  const tank = (to: string) => `  a: {kind: stirred, volume: 20 L, to: ${to}}`;
  const plain = parsed(tank("out"));
  const withPart = parsed(`${tank("n")}\n  n: {kind: part, use: core.yaml, to: out}`);
  const recycled = parsed(`${tank("n")}\n  n: {kind: part, use: core.yaml, to: {y: {a: 30 %, out: rest}}}`);

  test("one that is new or gone is one line", () => {
    const after = "Core, core.yaml, 3 bodies with its ports";
    expect(said(diffNetworks(plain, withPart)).filter((d) => d.what === "added")).toEqual([
      { what: "added", of: "part", name: "n", after },
    ]);
    expect(said(diffNetworks(withPart, plain)).filter((d) => d.what === "removed")).toEqual([
      { what: "removed", of: "part", name: "n", before: after },
    ]);
  });

  test("a recycle that is gone is told by the places it led to", () => {
    expect(said(diffNetworks(recycled, withPart))).toEqual([
      { what: "changed", of: "compartment", name: "n.y", key: "to", before: "{a: 30 %, out: rest}", after: "out" },
    ]);
  });

  test("no change looks like none", () => {
    const other = parsed(`${tank("m")}\n  m: {kind: part, use: core.yaml, with: {v: 9 L}, to: out}`);
    const changed = said(diffNetworks(withPart, other)).filter((d) => d.what === "changed");
    expect(changed.map(({ key, before, after }) => [key, before, after])).toEqual([["volume", "v = 8 L", "v = 9 L"]]);
  });

  test("a port that is new or gone says where it leads", () => {
    const repeated = parsed(`${tank("n")}\n  n: {kind: part, use: core.yaml, repeat: 2, to: out}`);
    const told = said(diffNetworks(withPart, repeated)).map(({ what, name, before, after }) => [
      what,
      name,
      before ?? after,
    ]);
    expect(told).toContainEqual(["added", "n.1.y", "junction, to n.2.x"]);
    expect(told).toContainEqual(["removed", "n.tank", "stirred, volume v, to n.y"]);
  });

  test("a value written the same is told by what it comes to", () => {
    const value = (text: string) =>
      parsed(`  a: {kind: stirred, volume: ${text}, to: out}`).compartments[0].values.volume;
    const [v, w] = [value("20 L"), value("30 L")];
    const at = v.at;
    const of = (what: typeof v) => ({ what: { ...what, at }, network: plain, env: [] });
    expect(valueWords(of(v), of(w))).toEqual(["20 L = 20 L", "20 L = 30 L"]);
  });
});

test("what is added or gone is told with its counts, its choices and the substances that it divides", () => {
  const row = "second: {kind: stirred, volume: 300 L, repeat: 3, backflow: 20 %, to: {bulk: 50 %, product: rest}";
  const after = vessel.replace(
    "second: {kind: stirred, volume: 300 L, to: bulk}",
    `${row}, sends: {solids: {bulk: 90 %, product: rest}}}\n  spare: {kind: dispersed, volume: 3 L, peclet: 4, ends: open, to: bulk}`,
  );
  const fed = after.replace("first: rest", "spare: 5 %, first: rest");
  const gone = said(diff(fed, vessel)).find((d) => d.name === "spare");
  expect(gone?.before).toBe("dispersed, volume 3 L, peclet 4, ends open, to bulk");
  const renamed = fed.replaceAll("second", "quite-another").replace("volume: 300 L, repeat", "volume: 290 L, repeat");
  const added = said(diff(vessel.replaceAll("second", "bulky"), renamed)).find((d) => d.name === "quite-another");
  expect(added?.after).toBe(
    "stirred, volume 290 L, backflow 20 %, repeat 3, sends solids {bulk: 90 %, product: rest}, to {bulk: 50 %, product: rest}",
  );
});

test("another basis is told, and kilograms are never compared with liters", () => {
  const plain =
    "network: Tank\nformat: 1\nfeeds: {f: {flow: 1 L/min, to: a}}\ncompartments: {a: {kind: stirred, volume: 1 m3, to: o}}\noutlets: [o]\n";
  const weighed = plain
    .replace("format: 1\n", "format: 1\nbasis: mass\n")
    .replace("1 L/min", "1 kg/min")
    .replace("1 m3", "1 kg");
  const [a, b] = [network(plain), network(weighed)];
  const { differences, matching } = diffNetworks(a, b);
  expect(differences.some((d) => d.key === "basis" && d.before === "volume" && d.after === "mass")).toBe(true);
  const [before, after] = [compile(a).plant as Plant, compile(b).plant as Plant];
  const held = figuresOf(before, after, matching).find((f) => f.of === "volume" && f.name === "all");
  expect(held?.before?.value).toBe(held?.after?.value);
  expect(held?.same).toBe(false);
});

test("substances sent to single tanks of a row are told by those tanks", () => {
  const row = (shares: string): string =>
    `network: Row\nformat: 1\nfeeds: {f: {flow: 1 L/min, to: a}}\ncompartments:\n  a: {kind: junction, to: {row.3: 40 %, row: rest}, sends: {solids: ${shares}}}\n  row: {kind: stirred, volume: 6 L, repeat: 3, to: o}\noutlets: [o]\n`;
  const [change] = said(diff(row("{row.3: 90 %, row: rest}"), row("{row.3: 80 %, row: rest}")));
  expect([change.before, change.after]).toEqual(["{row.3: 90 %, row: rest}", "{row.3: 80 %, row: rest}"]);
});
