import type { Plant } from "../compile/plant.js";
import { meanAges } from "../simulate/ages.js";
import type { Tile } from "../svg/mosaic-body.js";

/** The stirred cells of one body: volumes, m3, and a value each, SI. */
export interface Cells {
  readonly volume: readonly number[];
  readonly value: readonly number[];
  /** Cells stand in this order from inlet to outlet; without one they lie anyhow, and `age` (s) tells which come first. */
  readonly inRow: boolean;
  readonly age?: readonly number[];
}

/** More tiles than this are a grey haze. */
const mostTiles = 108;

/**
 * Cells of bodies that have several, by the body's name: those of zones, and rows of equal tanks.
 * @param at value of what a node holds, by the node's number, SI
 */
export function cellsOf(plant: Plant, at: (node: number) => number): ReadonlyMap<string, Cells> {
  const found = new Map<string, Cells>();
  let ages: Float64Array | undefined;
  for (const { name, kind } of plant.network.compartments) {
    const nodes = kind.zoned ? nodesUnder(plant, name) : members(plant, name);
    if (nodes.length < 2) continue;
    if (kind.zoned) ages ??= meanAges(plant);
    const own = {
      volume: nodes.map((i) => plant.columns.volume[i]),
      value: nodes.map(at),
      inRow: !kind.zoned,
      ...(kind.zoned ? { age: nodes.map((i) => ages?.[i] ?? Number.NaN) } : {}),
    };
    if (own.value.every(Number.isFinite)) found.set(name, own);
  }
  return found;
}

function nodesUnder({ columns }: Plant, name: string): readonly number[] {
  const nodes: number[] = [];
  const start = `${name}.`;
  for (let i = 0; i < columns.size; i++) {
    if (columns.volume[i] > 0 && columns.nameOf(i).startsWith(start)) nodes.push(i);
  }
  return nodes;
}

function members({ exit, columns }: Plant, name: string): readonly number[] {
  const nodes: number[] = [];
  for (let k = 1; exit.has(`${name}.${k}`); k++) nodes.push(exit.get(`${name}.${k}`) ?? -1);
  return nodes.every((i) => columns.volume[i] > 0) ? nodes : [];
}

/**
 * The tiles of a picture of `cells`, in columns. A row keeps its order, one tile a column. Others stand by their age, the youngest
 * left, neighbours in age drawn together where there are too many; within a column the higher value stands higher.
 * @param toneOf 0 to 1 of a value
 */
export function tilesOf(cells: Cells, toneOf: (value: number) => number): readonly (readonly Tile[])[] {
  const all = cells.volume.map((volume, k) => ({ volume, value: cells.value[k], age: cells.age?.[k] ?? k }));
  const total = all.reduce((sum, c) => sum + c.volume, 0);
  const tile = (c: { volume: number; value: number }): Tile => ({ share: c.volume / total, tone: toneOf(c.value) });
  if (cells.inRow) return joined(all, total, 36).map((c) => [tile(c)]);
  const tiles = joined(
    all.sort((a, b) => a.age - b.age),
    total,
    mostTiles,
  );
  const perColumn = Math.max(1, Math.round(Math.sqrt(tiles.length / 1.4)));
  const columns: (typeof tiles)[] = [];
  for (let k = 0; k < tiles.length; k += perColumn) columns.push(tiles.slice(k, k + perColumn));
  return columns.map((column) => column.sort((a, b) => b.value - a.value).map(tile));
}

/** Neighbours together, each lot of about as much volume, values by volume; at most `most` of them. */
function joined<C extends { volume: number; value: number }>(
  cells: readonly C[],
  total: number,
  most: number,
): { volume: number; value: number }[] {
  if (cells.length <= most) return [...cells];
  const lots = new Map<number, { volume: number; value: number }>();
  let passed = 0;
  for (const { volume, value } of cells) {
    const lotAt = Math.min(most - 1, Math.floor(((passed + volume / 2) / total) * most));
    passed += volume;
    const lot = lots.get(lotAt);
    if (!lot) lots.set(lotAt, { volume, value });
    else {
      lot.value = (lot.value * lot.volume + value * volume) / (lot.volume + volume);
      lot.volume += volume;
    }
  }
  return [...lots.values()];
}
