import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { parseNetwork } from "../../src/parse/network.js";
import { reordered } from "../compile/variants.js";
import { randomNetwork } from "../simulate/random-network.js";
import { vessels } from "../simulate/vessels.js";

const told = (text: string): string[] =>
  parseNetwork(text).problems.map((p) => `${p.code} ${p.at.source.text.slice(p.at.from, p.at.to)}`);

/** A network of one feed of 10 L/min into `a`, with compartments in YAML flow style. */
const vessel = (compartments: string, { to = "a", outlets = "out", more = "" } = {}): string => `network: A vessel
format: 1
${more}feeds: {feed: {flow: 10 L/min, to: ${to}}}
compartments: {${compartments}}
outlets: [${outlets}]
`;
const t = (name: string, rest: string): string => `${name}: {kind: stirred, volume: 1 L, ${rest}}`;

test.each(Object.entries(vessels))("%s has nothing wrong", (_, text) => expect(told(text)).toEqual([]));

describe("random networks", () => {
  const seeds = fc.integer({ min: 1, max: 1e6 });

  test("have nothing wrong, in whatever order their compartments stand", () => {
    fc.assert(
      fc.property(seeds, (seed) => {
        expect(told(randomNetwork(seed)).filter((p) => !p.startsWith("exchange-fast"))).toEqual([]);
        const turned = reordered(randomNetwork(seed), (lines) => [...lines].reverse());
        expect(told(turned).filter((p) => !p.startsWith("exchange-fast"))).toEqual([]);
      }),
      { numRuns: 40, seed: 20261207 },
    );
  });

  test("less a compartment say what is missing, and no more than once for each stream to it", () => {
    fc.assert(
      fc.property(seeds, fc.nat(30), (seed, which) => {
        let gone = "";
        const text = reordered(randomNetwork(seed), (lines) => {
          const k = which % lines.length;
          gone = (/^ {2}(\w+):/.exec(lines[k]) ?? [])[1];
          return lines.filter((_, i) => i !== k);
        });
        const problems = told(text);
        const mentions = text.split(new RegExp(`\\b${gone}\\b`)).length - 1;
        expect(problems.filter((p) => p === `unknown-place ${gone}`)).toHaveLength(mentions);
        // Its own corner hung on it alone: that is no echo.
        const others = problems.filter((p) => !p.startsWith("unknown-place"));
        expect(others.filter((p) => !/^unreachable s\d/.test(p))).toEqual([]);
      }),
      { numRuns: 60, seed: 20261208 },
    );
  });
});

describe("a fault is told where it begins, and once", () => {
  test.each([
    [
      "a chain that nothing feeds",
      vessel([t("a", "to: out"), t("b", "to: c"), t("c", "to: d"), t("d", "to: out")].join(", ")),
      ["unreachable b"],
    ],
    [
      "two branches that nothing feeds",
      vessel([t("a", "to: out"), t("b", "to: out"), t("c", "to: out")].join(", ")),
      ["unreachable b", "unreachable c"],
    ],
    [
      "a circle that nothing feeds",
      vessel([t("a", "to: out"), t("b", "to: c"), t("c", "to: {b: 50 %, out: rest}")].join(", ")),
      ["unreachable b"],
    ],
    [
      "an outlet behind what nothing feeds",
      vessel([t("a", "to: out"), t("b", "to: drain")].join(", "), { outlets: "out, drain" }),
      ["unreachable b"],
    ],
    [
      "a tank that keeps what it gets, at the end of a line",
      vessel([t("a", "to: b"), t("b", "to: c"), "c: {kind: stirred, volume: 1 L}"].join(", ")),
      ["no-way-out c"],
    ],
    [
      "a tank that feeds itself alone",
      vessel([t("a", "to: {b: 50 %, out: rest}"), t("b", "to: b")].join(", ")),
      ["closed-loop b"],
    ],
    [
      "a circle with only exchange to the rest",
      vessel([t("a", "to: {b: 50 %, out: rest}"), t("b", "to: c"), t("c", "to: b, exchange: {a: 1 L/min}")].join(", ")),
      ["closed-loop b"],
    ],
    [
      "two circles",
      vessel([t("a", "to: {b: 20 %, c: 20 %, out: rest}"), t("b", "to: b"), t("c", "to: c")].join(", ")),
      ["closed-loop b", "closed-loop c"],
    ],
    [
      "a slip in a name, and all behind it dry",
      vessel([t("a", "to: {bb: 50 %, out: rest}"), t("b", "to: drain")].join(", "), { outlets: "out, drain" }),
      ["unknown-place bb"],
    ],
    [
      "an unknown name in a volume hides no share that is wrong",
      vessel("a: {kind: stirred, volume: v, to: {out: 120 %}}"),
      ["unknown-name v", "share-range 120 %"],
    ],
    [
      "a corner of a corner",
      vessel(
        [
          t("a", "to: out, exchange: {b: 1 L/min}"),
          "b: {kind: stirred, volume: 1 L, exchange: {c: 1 L/min}}",
          "c: {kind: stirred, volume: 1 L}",
        ].join(", "),
      ),
      [],
    ],
    ["a name of the feed on a compartment", vessel(t("feed", "to: out"), { to: "feed" }), ["name-taken feed"]],
    ["the outlet twice", vessel(t("a", "to: out"), { outlets: "out, out" }), ["name-taken out"]],
  ])("%s", (_, text, expected) => {
    expect(told(text)).toEqual(expected);
  });
});

describe("parameters", () => {
  const with1 = (p: string, use = "p"): string[] =>
    told(vessel(`a: {kind: stirred, volume: ${use}, to: out}`, { more: `parameters: {p: {${p}}}\n` }));
  test.each([
    ["value: 1 L, between: [1 L, 2 L]", []],
    ["value: 2 L, between: [1 L, 2 L]", []],
    ["value: 2 L, between: [2 L, 2 L]", ["bounds-reversed 2 L"]],
    ["value: 3 L, between: [1 L, 2 L]", ["start-outside-bounds 3 L"]],
    ["value: 500 mL, between: [1 L, 2 L]", ["start-outside-bounds 500 mL"]],
    ["value: 1 L, between: [0.5 L, 2 kg]", ["wrong-dimension 2 kg"]],
    ["value: 1 L, between: [-1 L, 2 L]", ["bound-corner -1 L"]],
    ["value: 1 L, between: [0 L, 2 L], spacing: log", ["log-bounds 0 L"]],
    ["value: 1 L, between: [0 L, 1 L / 0]", ["not-finite 1 L / 0"]],
  ])("{%s}", (p, expected) => {
    expect(with1(p)).toEqual(expected);
  });

  test("a corner that `requires:` forbids is no news", () => {
    const text = (more: string) =>
      vessel("a: {kind: stirred, volume: 10 L - p, to: out}", {
        more: `parameters: {p: {value: 1 L, between: [0 L, 20 L]}}\n${more}`,
      });
    expect(told(text(""))).toEqual(["bound-corner 20 L"]);
    expect(told(text("requires: [p < 10 L]\n"))).toEqual([]);
  });

  test("of many parameters each end is looked at alone", () => {
    const names = Array.from({ length: 12 }, (_, i) => `p${i}`);
    const text = vessel(`a: {kind: stirred, volume: 10 L - ${names.join(" - ")}, to: out}`, {
      more: `parameters: {${names.map((n) => `${n}: {value: 0.1 L, between: [0 L, ${n === "p7" ? 20 : 0.2} L]}`).join(", ")}}\n`,
    });
    expect(told(text)).toEqual(["bound-corner 20 L"]);
  });
});
