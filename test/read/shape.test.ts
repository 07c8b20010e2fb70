import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { plainOf } from "../../src/read/plain.js";
import { documentKind } from "../../src/read/shape.js";
import { documents } from "../../src/schema/validators.js";
import { examples } from "./documents.js";
import { check } from "./read.js";

const network = (rest: string) => check(`network: n\nformat: 1\n${rest}`);
const trial = (rest: string) => check(`trial: t\nformat: 1\n${rest}`);

test.each(Object.entries(examples))("the example of the manual passes: %s", (_, text) => {
  expect(check(text).problems).toEqual([]);
});

test("a number in a text, a title of digits, a quoted number of tanks", () => {
  expect(
    check("network: 2024\nformat: 1\nnotes: 7\ncompartments: {a: {kind: stirred, volume: 1 L}}\n").findings,
  ).toEqual([]);
});

describe("which document it is", () => {
  test.each([
    ["netwrk: a\nformat: 1", "network", ["unknown-document netwrk"]],
    ["trial: a\nformat: 1", "network", ["wrong-document trial"]],
    ["format: 1\nnetwork: a", "network", []],
    ["network: a", "network", ["missing-format network"]],
    ["network: a\nformat: 2", "network", ["unsupported-format 2"]],
    ["network: a\nformat: one", "network", ["unsupported-format one"]],
    ["network:\nformat: 1", "network", ["empty-value network"]],
  ] as const)("%j as %s", (text, kind, findings) => {
    expect(check(text, kind).findings).toEqual(findings);
  });
});

describe("one finding a place, at the place", () => {
  test.each([
    ["unknown key", "feds: {}", ["unknown-key feds"]],
    ["missing key", "feeds: {f: {to: x}}", ["missing-key f"]],
    ["two missing keys", "parameters: {a: {}}\nfeeds: {f: {}}", ["missing-key a", "missing-key f", "missing-key f"]],
    ["empty value", "constants: {a: }", ["empty-value a"]],
    ["empty map of names", "feeds:\noutlets: [a]", ["empty-value feeds"]],
    ["a value for a list", "outlets: product", ["wrong-shape product"]],
    ["a map for a value", "feeds: {f: {flow: {a: 1}, to: x}}", ["wrong-shape {a: 1}"]],
    ["a list for a value or a map", "constants: {a: [1]}", ["wrong-shape [1]"]],
    ["a text for a compartment", "compartments: {a: tank}", ["wrong-shape tank"]],
    ["wrong choice", "parameters: {a: {value: 1, spacing: lag}}", ["wrong-choice lag"]],
    ["wrong kind", "compartments: {a: {kind: stired, volume: 1 L}}", ["wrong-choice stired"]],
    ["missing kind", "compartments: {a: {volume: 1 L}}", ["missing-key a"]],
    ["not whole", "compartments: {a: {kind: stirred, volume: 1 L, repeat: 2.5}}", ["not-whole 2.5"]],
    ["too few", "compartments: {a: {kind: stirred, volume: 1 L, repeat: 0}}", ["not-whole 0"]],
    [
      "a key of another kind",
      "compartments: {a: {kind: tubular, volume: 1 L, to: b, repeat: 2}}",
      ["unknown-key repeat"],
    ],
    ["three bounds", "parameters: {a: {value: 1, between: [0,5 %, 60 %]}}", ["wrong-length [0,5 %, 60 %]"]],
    ["bad name as key", "constants: {3c: 1}", ["bad-name 3c"]],
    ["bad name as value", "compartments: {a: {kind: tubular, volume: 1 L, to: b c}}", ["bad-name b c"]],
    ["none of several keys", "checks: [{equals: 3 L}]", ["one-of {equals: 3 L}"]],
    [
      "two of several keys",
      "checks: [{volume: a, flow: b, equals: 3 L}]",
      ["one-of {volume: a, flow: b, equals: 3 L}"],
    ],
  ])("%s", (_, text, findings) => {
    expect(network(text).findings).toEqual(findings);
  });

  test("names of the language's own machinery are only names", () => {
    expect(network("constants: {constructor: 1, toString: 2, hasOwnProperty: 3, valueOf: 4}").findings).toEqual([]);
    expect(network("constructor: 1").findings).toEqual(["unknown-key constructor"]);
    expect(network("compartments: {a: {kind: constructor}}").findings).toEqual(["wrong-choice constructor"]);
    expect(network("compartments: {a: {kind: dead, volume: 1 L, toString: 1}}").findings).toEqual([
      "unknown-key toString",
    ]);
  });
});

describe("a flow of a duty", () => {
  const duty = (flow: string): string => `duty: d\nformat: 1\nflows: {feed: ${flow}}\nfeeds: {feed: {A: 1 mol/L}}\n`;

  test.each([
    ["1 L/min", []],
    ["{from: 1 L/min, to: 2 L/min, start: 5 min, lasting: 1 min}", []],
    ["{file: q.csv, time: {column: t, unit: min}, value: {column: q, unit: L/min}}", []],
    ["{file: q.csv}", ["missing-key feed", "missing-key feed"]],
  ])("may change in time: %s", (flow, findings) => {
    expect(check(duty(flow)).findings).toEqual(findings);
  });
});

describe("a change", () => {
  const change = (rest: string) => network(`change: {${rest}}`);

  test.each([
    ["parameters: {bypass: {value: 2 %}}", []],
    ["compartments: {corner: null, bulk: {volume: 3 L}}", []],
    ["outlets: null, constants: {a: null}", []],
    ["parametrs: {}", ["unknown-key parametrs"]],
    ["compartments: {bulk: {volum: 3 L}}", ["unknown-key volum"]],
    ["parameters: {bypass: {value: [2]}}", ["wrong-shape [2]"]],
    ["basis: mass", []],
    ["basis: mas", ["wrong-choice mas"]],
    ["parameters: {bypass: }", ["empty-in-change bypass"]],
  ])("%s", (text, findings) => {
    expect(change(text).findings).toEqual(findings);
  });

  test("stands alone", () => {
    expect(network("change: {}\noutlets: [a]").findings).toEqual(["unknown-key outlets"]);
  });
});

test("injections and readings one or many", () => {
  const one = "injection: {at: feed, step: 2 g/L}\nreadings: [{at: out}]";
  const many = "injection: [{at: feed, pulse: 1 g}, {at: feed, step: {from: 0 g/L, to: 1 g/L}}]\nreadings: [{at: out}]";
  expect([trial(one).findings, trial(many).findings]).toEqual([[], []]);
  expect(trial(many.replace("pulse: 1 g", "puls: 1 g")).findings).toEqual([
    "one-of {at: feed, puls: 1 g}",
    "unknown-key puls",
  ]);
});

test("findings name the nearest key", () => {
  const [{ fix }] = network("feds: {}").problems;
  expect(fix).toBe("did you mean `feeds`?");
});

describe("whatever stands where", () => {
  const odd = fc.constantFrom(
    "",
    "null",
    "7",
    "-1",
    "2.5",
    "a b",
    "[]",
    "[1, 2]",
    "{}",
    "{x: 1}",
    "{kind: stirred}",
    "[[{}]]",
    '"q"',
  );

  test("an odd value or key anywhere is worded, or right, and never a silent refusal", () => {
    for (const text of Object.values(examples)) {
      const spots = [...text.matchAll(/: ([^{}[\],\n#"]+?)(?=[,}\n\]])/g)].map((m) => [
        m.index + 2,
        m.index + 2 + m[1].length,
      ]);
      fc.assert(
        fc.property(fc.constantFrom(...spots), odd, ([from, to], value) => {
          const { tree, problems } = check(text.slice(0, from) + value + text.slice(to));
          if (!tree) return;
          const kind = documentKind(tree);
          if (kind && !documents[kind].validate(plainOf(tree))) expect(problems.length).toBeGreaterThan(0);
          for (const { message, fix } of problems)
            expect(`${message} ${fix}`).not.toMatch(/undefined|\[object|something else/);
          const places = problems.map((p) => `${p.code} ${p.at.from} ${p.message}`);
          expect(new Set(places).size).toBe(places.length);
        }),
        { numRuns: 150 },
      );
    }
  });
});
