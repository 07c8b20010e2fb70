import { describe, expect, test } from "vitest";
import { isCell, placeNames } from "../../src/check/places.js";
import { parseNetwork } from "../../src/parse/network.js";

const files: Record<string, string> = {
  "v.csv": "id,v\na,1\nb,2\n",
  "f.csv": "from,to,q\nfeed,a,1\na,b,1\nb,out,1\n",
  "g.csv": "from,to,q\nfeed,a,1\nside,b,1\na,b,1\nb,out,1\nb,top,1\n",
};

function network(table: string, feeds: string, to: string) {
  const text = `network: Zones
format: 1
feeds: ${feeds}
compartments:
  core:
    kind: zones
    volumes: {file: v.csv, id: {column: id}, volume: {column: v, unit: L}}
    flows: {file: ${table}, from: {column: from}, to: {column: to}, flow: {column: q, unit: L/min}}
    to: ${to}
outlets: [product]
`;
  const { document, problems } = parseNetwork(text, { read: (path) => files[path] });
  if (!document) throw new Error(problems.map((p) => p.message).join("; "));
  return document;
}

describe("places of a zoned body", () => {
  test("with one inlet and one outlet it stands for them; they may be named too", () => {
    const one = network("f.csv", "{feed: {flow: 1 L/min, to: core.feed}}", "product");
    expect(placeNames(one)).toMatchObject({ entered: ["core", "core.feed"], left: ["core", "core.out"] });
  });

  test("with several it does not", () => {
    const feeds = "{feed: {flow: 1 L/min, to: core.feed}, side: {flow: 1 L/min, to: core.side}}";
    const two = network("g.csv", feeds, "{out: product, top: product}");
    expect(placeNames(two)).toMatchObject({ entered: ["core.feed", "core.side"], left: ["core.out", "core.top"] });
    expect(two.start.entry.get("core")).toBeUndefined();
    for (const name of placeNames(two).entered) expect(two.start.entry.has(name)).toBe(true);
    for (const name of placeNames(two).left) expect(two.start.exit.has(name)).toBe(true);
  });

  test("its cells are places", () => {
    const one = network("f.csv", "{feed: {flow: 1 L/min, to: core}}", "product");
    expect(["core.a", "core.b", "core.c", "core", "a"].map((name) => isCell(one, name))).toEqual([
      true,
      true,
      false,
      false,
      false,
    ]);
  });
});
