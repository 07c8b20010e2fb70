import { once } from "node:events";
import { createWriteStream, existsSync, mkdirSync, renameSync, writeFileSync } from "node:fs";
import { join } from "node:path";

/** s <- 48271 s mod (2^31 - 1): every product is below 2^53, so that doubles make the same numbers in any language. */
export function congruential(seed: number): () => number {
  let s = seed;
  const next = (): number => {
    s = (48271 * s) % 2147483647;
    return s / 2147483647;
  };
  for (let i = 0; i < 10; i++) next();
  return next;
}

/** How the volumes of a lattice's cells are drawn: within a factor of three, or over four decades. */
export type Spread = "even" | "wide";

/**
 * A cube of stirred cells as zoned from a flow field: 1 L/min down each column, exchange of 0.5 to 2 L/min with the
 * neighbours in a layer and up to 0.5 L/min between layers. Writes volumes.csv, flows.csv, case.json and lattice.yaml into
 * a folder of its own, unless they are there. Demo data.
 * @param cells a cube
 * @returns the folder
 */
export async function latticeCase(under: string, cells: number, spread: Spread): Promise<string> {
  const n = Math.round(Math.cbrt(cells));
  if (n ** 3 !== cells) throw new RangeError(`a lattice has a cube of cells, not ${cells}`);
  const folder = join(under, `lattice${cells}${spread === "wide" ? "-wide" : ""}`);
  if (existsSync(join(folder, "lattice.yaml"))) return folder;
  mkdirSync(folder, { recursive: true });
  const random = congruential(777000 + n);
  let [total, text] = [0, "id,volume_L\n"];
  for (let i = 0; i < cells; i++) {
    const u = random();
    const volume = spread === "wide" ? 10 ** (-4 * u) : 0.5 + u;
    total += volume;
    text += `c${i},${volume}\n`;
  }
  writeFileSync(join(folder, "volumes.csv"), text);
  await writeFlows(join(folder, "flows.csv"), n, random);
  writeFileSync(join(folder, "case.json"), JSON.stringify({ N: cells, total_volume_L: total, feed_L_per_min: n * n }));
  const draft = join(folder, "draft.yaml");
  writeFileSync(draft, document(n, cells));
  renameSync(draft, join(folder, "lattice.yaml"));
  return folder;
}

async function writeFlows(path: string, n: number, random: () => number): Promise<void> {
  const file = createWriteStream(path);
  const at = (x: number, y: number, z: number): number => x + n * (y + n * z);
  let text = "from,to,flow_L_per_min\n";
  for (let i = 0; i < n * n; i++) text += `feed,c${i},1\n`;
  const both = (i: number, j: number, down: number, up: number): void => {
    text += `c${i},c${j},${down}\nc${j},c${i},${up}\n`;
  };
  for (let z = 0; z < n; z++) {
    for (let y = 0; y < n; y++) {
      for (let x = 0; x < n; x++) {
        const i = at(x, y, z);
        for (const j of [x + 1 < n ? at(x + 1, y, z) : -1, y + 1 < n ? at(x, y + 1, z) : -1]) {
          if (j < 0) continue;
          const q = 0.5 + 1.5 * random();
          both(i, j, q, q);
        }
        if (z + 1 < n) {
          const q = 0.5 * random();
          both(i, at(x, y, z + 1), 1 + q, q);
        } else text += `c${i},out,1\n`;
      }
    }
    if (!file.write(text)) await once(file, "drain");
    text = "";
  }
  file.end();
  await once(file, "finish");
}

const document = (n: number, cells: number): string => `network: Lattice of ${cells} zones
format: 1
feeds:
  feed: {flow: ${n * n} L/min, to: core}
compartments:
  core:
    kind: zones
    volumes: {file: volumes.csv, id: {column: id}, volume: {column: volume_L, unit: L}}
    flows: {file: flows.csv, from: {column: from}, to: {column: to}, flow: {column: flow_L_per_min, unit: L/min}}
    to: {out: product}
outlets: [product]
`;
