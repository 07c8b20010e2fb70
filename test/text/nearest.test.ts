import fc from "fast-check";
import { expect, test } from "vitest";
import { distance, nearest } from "../../src/text/nearest.js";

test.each([
  ["feds", ["feeds", "format", "parameters"], "feeds"],
  ["volmue", ["volume", "value"], "volume"],
  ["Volume", ["volume", "repeat"], "volume"],
  ["bulk", ["corner", "riser"], undefined],
  ["a", ["b"], undefined],
  ["lag", ["linear", "log"], "log"],
  ["stired", ["stirred", "tubular", "dead"], "stirred"],
  ["compartment", ["compartments", "constants"], "compartments"],
  ["product", ["product"], undefined],
])("%s among %j: %s", (name, candidates, result) => {
  expect(nearest(name, candidates)).toBe(result);
});

const word = fc.string({ unit: fc.constantFrom("a", "b", "c", "A"), maxLength: 6 });

test("distance is a distance", () => {
  fc.assert(
    fc.property(word, word, (a, b) => {
      expect(distance(a, a)).toBe(0);
      expect(distance(a, b)).toBe(distance(b, a));
      expect(distance(a, b)).toBeLessThanOrEqual(Math.max(a.length, b.length));
      expect(distance(a, b) > 0).toBe(a !== b);
    }),
  );
});

test("one slip in a word of six letters finds the word", () => {
  fc.assert(
    fc.property(fc.constantFrom("volume", "bypass", "stirred"), fc.nat(5), (name, at) => {
      const dropped = name.slice(0, at) + name.slice(at + 1);
      const swapped = name.slice(0, at) + (name[at + 1] ?? "") + name[at] + name.slice(at + 2);
      for (const slip of [dropped, swapped])
        if (slip !== name) expect(nearest(slip, ["volume", "bypass", "stirred"])).toBe(name);
    }),
  );
});
