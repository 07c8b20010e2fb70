import { Part, type Plant } from "../compile/plant.js";
import { stronglyConnected } from "../numerics/graph.js";
import { type MixedRows, settle } from "../numerics/mixed-rows.js";
import { RowBuilder } from "../numerics/sparse.js";
import { type Entry, partsOf } from "./entry.js";

/** A plant of cells and joints alone as one sparse system, for any number of cells: no object per cell. */
export interface CellSystem {
  /** Rates of the cells' concentrations, 1/s; then the joints, each a mean of what enters it. */
  readonly rows: MixedRows;
  /** Where each node of the plant is among the unknowns. */
  readonly place: Int32Array;
  /** Detectors come after so many cells, in their order. */
  readonly cells: number;
  /** Of each state, m3; detectors hold nothing. */
  readonly volume: Float64Array;
  /** The same, detectors as large as a mean cell. */
  readonly weight: Float64Array;
  /** 1/m3: concentrations that a unit put in all at once makes; 0 for joints. */
  readonly start: Float64Array;
  /** s/m3, by unknown: what of a unit put in all at once leaves a joint undispersed. */
  readonly direct: Float64Array;
}

/** The joints in an order in which each comes after those that feed it; undefined where some form a circle. */
function jointsInOrder({ columns, from, to }: Plant): number[] | undefined {
  const { size, part } = columns;
  const joints: number[] = [];
  const number = new Int32Array(size).fill(-1);
  for (let i = 0; i < size; i++) if (part[i] === Part.Joint) number[i] = joints.push(i) - 1;
  const [a, b]: number[][] = [[], []];
  for (let k = 0; k < from.length; k++) {
    if (number[from[k]] < 0 || number[to[k]] < 0) continue;
    if (from[k] === to[k]) return undefined;
    a.push(number[from[k]]);
    b.push(number[to[k]]);
  }
  const groups = stronglyConnected({ size: joints.length, from: a, to: b });
  return groups.every((g) => g.length === 1) ? groups.map(([j]) => joints[j]) : undefined;
}

function hasCellsOnly({ columns: { size, part } }: Plant): boolean {
  for (let i = 0; i < size; i++) if (part[i] !== Part.Cell && part[i] !== Part.Joint) return false;
  return true;
}

/** Is a plant made of cells and joints alone, no joints in a circle, every cell with a volume? */
export function isCellsOnly(plant: Plant): boolean {
  return hasCellsOnly(plant) && jointsInOrder(plant) !== undefined;
}

/** A first-order detector at a node; its lag in s. */
export interface Detector {
  readonly node: number;
  readonly lag: number;
}

/**
 * @param entry     where a unit of tracer is put in
 * @param detectors states of their own, after the cells
 * @throws RangeError where `isCellsOnly` does not hold
 */
export function cellSystem(plant: Plant, entry: Entry, detectors: readonly Detector[] = []): CellSystem {
  const { columns, from, to, flow } = plant;
  const { size, part, inflow } = columns;
  const place = new Int32Array(size);
  let states = 0;
  for (let i = 0; i < size; i++) if (part[i] === Part.Cell) place[i] = states++;
  const cells = states;
  states += detectors.length;
  const joints = hasCellsOnly(plant) ? jointsInOrder(plant) : undefined;
  if (!joints) throw new RangeError("a network of stirred cells and junctions alone is wanted");
  joints.forEach((node, j) => {
    place[node] = states + j;
  });
  const volume = new Float64Array(states);
  const over = new Float64Array(size); // what a link's flow is divided by where it ends
  for (let i = 0; i < size; i++) {
    const cell = part[i] === Part.Cell;
    if (cell) volume[place[i]] = columns.volume[i];
    over[i] = cell ? columns.volume[i] : inflow[i];
  }
  const builder = new RowBuilder(size + detectors.length);
  for (let k = 0; k < flow.length; k++) builder.expect(place[to[k]]);
  for (let i = 0; i < states; i++) builder.expect(i);
  for (let d = cells; d < states; d++) builder.expect(d);
  for (let k = 0; k < flow.length; k++) {
    builder.add(place[to[k]], place[from[k]], over[to[k]] > 0 ? flow[k] / over[to[k]] : 0);
  }
  for (let i = 0; i < size; i++) {
    if (part[i] === Part.Cell) builder.add(place[i], place[i], -inflow[i] / columns.volume[i]);
  }
  detectors.forEach(({ node, lag }, d) => {
    builder.add(cells + d, place[node], 1 / lag);
    builder.add(cells + d, cells + d, -1 / lag);
  });
  const rows = { ...builder.rows(), states };
  const weight = volume.slice().fill(plant.volume.active / cells, cells);
  return { rows, place, volume, weight, cells, ...entered(rows, place, volume, plant, entry) };
}

/** What a unit put in all at once does to cells and joints. */
function entered(rows: MixedRows, place: Int32Array, volume: Float64Array, { columns }: Plant, entry: Entry) {
  const { size, states, start: begin, column, value } = rows;
  const direct = new Float64Array(size);
  const start = new Float64Array(size);
  const put = new Float64Array(size);
  for (const [node, part] of partsOf(entry)) {
    if (place[node] < states) start[place[node]] += part / volume[place[node]];
    else put[place[node]] += columns.inflow[node] > 0 ? part / columns.inflow[node] : 0;
  }
  for (let i = states; i < size; i++) {
    direct[i] = put[i];
    for (let e = begin[i]; e < begin[i + 1]; e++) if (column[e] >= states) direct[i] += value[e] * direct[column[e]];
  }
  for (let i = 0; i < states; i++) {
    for (let e = begin[i]; e < begin[i + 1]; e++) if (column[e] >= states) start[i] += value[e] * direct[column[e]];
  }
  settle(rows, start);
  return { start, direct };
}
