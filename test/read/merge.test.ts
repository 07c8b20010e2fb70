import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { mergeTree } from "../../src/read/merge.js";
import { child, type MapNode, type Tree } from "../../src/read/tree.js";
import { plain, read } from "./read.js";

const tree = (text: string, path?: string) => read(text, path).tree as MapNode;
const merged = (base: string, change: string) => plain(mergeTree(tree(base), tree(change)));

describe("a change laid over a document", () => {
  test.each([
    [
      "merges maps key by key",
      "p: {a: {value: 1, about: x}}",
      "p: {a: {value: 2}}",
      { p: { a: { value: "2", about: "x" } } },
    ],
    ["null removes", "p: {a: 1, b: 2}", "p: {a: null}", { p: { b: "2" } }],
    ["null for what is not there is nothing", "p: {a: 1}", "p: {c: null}", { p: { a: "1" } }],
    ["lists are replaced whole", "o: [a, b]", "o: [c]", { o: ["c"] }],
    ["`to` is replaced whole", "c: {to: {a: rest, b: 1 %}}", "c: {to: {d: 100 %}}", { c: { to: { d: "100 %" } } }],
    [
      "a changed kind replaces the compartment",
      "c: {x: {kind: stirred, repeat: 3, to: a}}",
      "c: {x: {kind: tubular, volume: 1 L, to: null}}",
      { c: { x: { kind: "tubular", volume: "1 L" } } },
    ],
    [
      "the same kind merges",
      "c: {x: {kind: stirred, volume: 2 L, to: a}}",
      "c: {x: {kind: stirred, repeat: 2}}",
      { c: { x: { kind: "stirred", volume: "2 L", to: "a", repeat: "2" } } },
    ],
    [
      "a value may become a map, and back",
      "k: {a: 1, b: {value: 2}}",
      "k: {a: {value: 3}, b: 4}",
      { k: { a: { value: "3" }, b: "4" } },
    ],
    ["what is new comes after", "p: {a: 1}", "q: {b: {c: 1, d: null}}", { p: { a: "1" }, q: { b: { c: "1" } } }],
  ])("%s", (_, base, change, result) => {
    expect(merged(base, change)).toEqual(result);
  });

  test("every node keeps the place where it was written", () => {
    const result = mergeTree(
      tree("p: {a: {value: 1, about: x}}", "base.yaml"),
      tree("p: {a: {value: 2}}", "change.yaml"),
    );
    const a = child(child(result, "p"), "a");
    expect(child(a, "value")?.at.source.path).toBe("change.yaml");
    expect(child(a, "about")?.at.source.path).toBe("base.yaml");
  });
});

const key = fc.constantFrom("a", "b", "c", "to", "kind");
const { document } = fc.letrec<{ value: unknown; document: Record<string, unknown> }>((tie) => ({
  value: fc.oneof({ maxDepth: 3 }, fc.constantFrom("1", "x y"), fc.array(fc.constantFrom("1", "2")), tie("document")),
  document: fc.dictionary(key, tie("value"), { maxKeys: 4 }),
}));
const fromPlain = (value: unknown): Tree => {
  const at = { source: { path: "made", text: "" }, from: 0, to: 0 };
  const scalar = (text: string) => ({ type: "scalar", at, text, plain: true, empty: false }) as const;
  if (Array.isArray(value)) return { type: "list", at, items: value.map(fromPlain) };
  if (typeof value === "string") return scalar(value);
  const entries = Object.entries(value as object).map(([k, v]) => ({ key: scalar(k), value: fromPlain(v) }));
  return { type: "map", at, entries };
};

test("an empty change changes nothing, and a change twice is a change once", () => {
  fc.assert(
    fc.property(document, document, (a, b) => {
      const [base, change] = [fromPlain(a) as MapNode, fromPlain(b) as MapNode];
      const once = mergeTree(base, change);
      expect(plain(mergeTree(base, fromPlain({})))).toEqual(plain(base));
      expect(plain(mergeTree(once, change))).toEqual(plain(once));
    }),
  );
});
