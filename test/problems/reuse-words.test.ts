import { expect, test } from "vitest";
import { reuseEntries } from "../../src/problems/catalogue/reuse.js";

test("one of a thing is told in the singular", () => {
  const { says } = reuseEntries["repeat-ports"];
  expect(says({ part: "core", inlets: 1, outlets: 2 })).toContain("1 inlet and 2 outlets");
  expect(says({ part: "core", inlets: 0, outlets: 1 })).toContain("0 inlets and 1 outlet,");
});
