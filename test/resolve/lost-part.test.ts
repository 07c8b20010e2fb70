import { expect, test } from "vitest";
import { type Library, network, parse } from "./parts.js";

const codes = (library: Library): string[] => parse(library).problems.map((p) => p.code);

const tank = "feeds: {feed: {flow: 1 L/min, to: tank}}\noutlets: [out]\ncompartments:\n  tank:";
const vessel = `feeds: {feed: {flow: 1 L/min, to: bowl}}
outlets: [out]
compartments:
  bowl: {kind: part, use: bowl.yaml, to: after}
  after: {kind: part, use: sound.yaml, to: out}`;

/** A network with a part, `vessel.yaml`, that has a part itself, `bowl.yaml`. */
const nested = (bowl: string | undefined, use = "use: vessel.yaml"): Library => ({
  "main.yaml": network(`feeds: {feed: {flow: 1 L/min, to: v}}
outlets: [out]
compartments: {v: {kind: part, ${use}, to: out}}`),
  "vessel.yaml": network(vessel),
  "sound.yaml": network(`${tank} {kind: stirred, volume: 1 L, to: out}`),
  ...(bowl === undefined ? {} : { "bowl.yaml": bowl }),
});

test("a sound part of a part is not lost", () => {
  expect(codes(nested(network(`${tank} {kind: stirred, volume: 1 L, to: out}`)))).toEqual([]);
});

test.each([
  ["is not there", undefined, "file-missing"],
  ["holds an error of shape", network(`${tank} {kind: stirred, volum: 1 L, to: out}`), "unknown-key"],
  ["leads back", network(`${tank} {kind: part, use: vessel.yaml, to: out}`), "circular-use"],
  ["is another document", "duty: A\nformat: 1\n", "wrong-document"],
])("what %s is told, not what leads to it or is fed by it", (_, bowl, code) => {
  expect(new Set(codes(nested(bowl)))).toContain(code);
  const echoes = codes(nested(bowl)).filter((c) => ["unknown-place", "inlet-unfed", "unknown-binding"].includes(c));
  expect(echoes).toEqual([]);
});

test("nor is what the parent gives to a name in it", () => {
  const found = codes(nested(undefined, "use: vessel.yaml, with: {bowl.size: 2 L}"));
  expect(found).toEqual(["file-missing"]);
});

test("a slip beside a lost part is told all the same", () => {
  const library = nested(undefined);
  expect(codes({ ...library, "vessel.yaml": network(vessel.replace("to: bowl}", "to: bowk}")) }).sort()).toEqual([
    "file-missing",
    "unknown-place",
  ]);
});
