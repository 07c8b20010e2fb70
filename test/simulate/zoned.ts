import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import { parseNetwork } from "../../src/parse/network.js";
import { uniformSource } from "./seeded.js";

/**
 * A cube of n^3 stirred cells between tables, 1 L/min down each column, neighbours exchanging. Demo data.
 * @param decades over which the volumes spread
 * @param rename  another name for cell i: what the order of names is should not matter
 */
export function zonedPlant(n: number, decades: number, rename: (i: number) => number = (i) => i): Plant {
  const random = uniformSource(n);
  const cells = n ** 3;
  const volumes = Array.from({ length: cells }, (_, i) => [rename(i), `c${i},${10 ** (-decades * random())}`] as const);
  const flows: string[] = [];
  const at = (x: number, y: number, z: number) => x + n * (y + n * z);
  for (let i = 0; i < n * n; i++) flows.push(`feed,c${i},1`, `c${cells - 1 - i},out,1`);
  for (let z = 0; z < n; z++) {
    for (let y = 0; y < n; y++) {
      for (let x = 0; x < n; x++) {
        const both = (j: number, down: number, up: number) =>
          flows.push(`c${at(x, y, z)},c${j},${down}`, `c${j},c${at(x, y, z)},${up}`);
        const [q, r, s] = [0.5 + random(), 0.5 + random(), 0.5 * random()];
        if (x + 1 < n) both(at(x + 1, y, z), q, q);
        if (y + 1 < n) both(at(x, y + 1, z), r, r);
        if (z + 1 < n) both(at(x, y, z + 1), 1 + s, s);
      }
    }
  }
  const files: Record<string, string> = {
    "v.csv": ["id,v", ...[...volumes].sort((a, b) => a[0] - b[0]).map(([, row]) => row)].join("\n"),
    "f.csv": ["from,to,q", ...flows].join("\n"),
  };
  const text = `network: Zones
format: 1
feeds: {feed: {flow: ${n * n} L/min, to: core}}
compartments:
  core:
    kind: zones
    volumes: {file: v.csv, id: {column: id}, volume: {column: v, unit: L}}
    flows: {file: f.csv, from: {column: from}, to: {column: to}, flow: {column: q, unit: L/min}}
    to: {out: product}
outlets: [product]
`;
  const { document, problems } = parseNetwork(text, { path: "zones.yaml", read: (path) => files[path] });
  const plant = document && compile(document).plant;
  if (!plant) throw new Error(problems.map((p) => `${p.code}: ${p.message}`).join("\n"));
  return plant;
}
