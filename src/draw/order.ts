import {
  coordSimplex,
  decrossTwoLayer,
  graph,
  layeringLongestPath,
  type MutGraphNode,
  type SugiNode,
  sugiyama,
} from "d3-dag";
import { type Edge, type Lane, untangle } from "./untangle.js";

export type { Edge };

/** A place in a column: a block, or the lane in which a stream passes a column that it does not stop in. */
export interface Seat {
  readonly id: string;
  readonly column: number;
  /** Rank from the top of its column. */
  readonly rank: number;
  /** Height that the crossing-poor layout suggests, in its own units. */
  readonly height: number;
  readonly lane: boolean;
}

export interface Ordered {
  /** By id; a lane's id names its edge and column. */
  readonly seats: ReadonlyMap<string, Seat>;
  /** Ids of each column from the top. */
  readonly columns: readonly (readonly string[])[];
  /** For each edge of the input the seats it visits, both ends included. */
  readonly ways: readonly (readonly string[])[];
}

/**
 * Columns from left to right and an order within them that has few crossings (Sugiyama's method by `d3-dag`).
 * @param names every block, in the order of the file
 * @param edges streams between them, free of circles
 * @param last  blocks that belong into the last column (outlets)
 * @param passing streams that will run above or below all that they pass
 */
export function orderBlocks(
  names: readonly string[],
  edges: readonly Edge[],
  last: ReadonlySet<string>,
  passing: readonly Lane[] = [],
): Ordered {
  const column = columnsOf(names, edges, last);
  const dag = graph<string, undefined>();
  const nodes = new Map<string, MutGraphNode<string, undefined>>();
  const node = (id: string): MutGraphNode<string, undefined> => {
    const known = nodes.get(id);
    if (known) return known;
    const made = dag.node(id);
    nodes.set(id, made);
    return made;
  };
  for (const name of names) node(name);
  const lanes = new Map<string, number>();
  const ways = edges.map(({ from, to }, k) => {
    const way = [from];
    for (let c = column.get(from)! + 1; c < column.get(to)!; c++) {
      lanes.set(`${k}:${c}`, c);
      way.push(`${k}:${c}`);
    }
    way.push(to);
    for (let i = 1; i < way.length; i++) node(way[i - 1]).child(node(way[i]), undefined);
    return way;
  });
  if (names.length === 0) return { seats: new Map(), columns: [], ways };
  // every edge spans one column now and all sources but loose ones stand in column 0: longest paths give our columns again
  const steps = ways.flatMap((way) => way.slice(1).map((to, k) => ({ from: way[k], to })));
  const twoLayer = decrossTwoLayer();
  const decross = (layers: SugiNode<string, undefined>[][]): void => {
    twoLayer(layers);
    // what stands loose may have links over several columns: their pieces keep a name of their own
    const named = layers.flat().map((n, k) => [n.data.role === "node" ? n.data.node.data : `loose ${k}`, n] as const);
    const byId = new Map(named);
    const idOf = new Map(named.map(([id, n]) => [n, id]));
    const ids = layers.map((layer) => layer.map((n) => idOf.get(n)!));
    untangle(ids, steps, passing);
    for (const [c, order] of ids.entries()) layers[c].splice(0, order.length, ...order.map((id) => byId.get(id)!));
  };
  sugiyama().layering(layeringLongestPath()).decross(decross).coord(coordSimplex()).nodeSize([1, 1]).gap([1, 1])(dag);
  const columns: string[][] = [];
  const inOrder = [...nodes].sort(([, a], [, b]) => a.x - b.x);
  const seats = new Map<string, Seat>();
  for (const [id, { x }] of inOrder) {
    const lane = lanes.has(id);
    const c = lane ? lanes.get(id)! : column.get(id)!;
    while (columns.length <= c) columns.push([]);
    seats.set(id, { id, column: c, rank: columns[c].length, height: x, lane });
    columns[c].push(id);
  }
  return { seats, columns, ways };
}

/** Longest path from the sources; `last` in a column of its own at the right. */
function columnsOf(names: readonly string[], edges: readonly Edge[], last: ReadonlySet<string>): Map<string, number> {
  const column = new Map(names.map((name) => [name, 0]));
  for (let pass = 0, moved = true; moved && pass <= names.length; pass++) {
    moved = false;
    for (const { from, to } of edges) {
      const least = column.get(from)! + 1;
      if (column.get(to)! >= least) continue;
      column.set(to, least);
      moved = true;
    }
  }
  let right = 0;
  for (const name of names) right = Math.max(right, column.get(name)! + (last.has(name) ? 0 : 1));
  for (const name of last) column.set(name, right);
  return column;
}
