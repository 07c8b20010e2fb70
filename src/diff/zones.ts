import type { ZoneTable } from "../compartments/zone-table.js";
import type { Network } from "../model/network.js";
import type { Span } from "../text/source.js";
import { dimensions } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import { type Change, change } from "./compare.js";

/** So many rows of a table are told, those that moved most; the others are counted. */
const mostTold = 10;

/** Rounding of a balance is no change, relative. */
const rounding = 1e-9;

/** A zoned body of one side. */
interface Side {
  readonly zones: ZoneTable;
  readonly at: Span;
  readonly network: Network;
}

/** Rows of the tables of a zoned body that are not the same: cells by their names and volumes, flows by where they go. */
export function zoneChanges(before: Side, after: Side): Change[] {
  const [a, b] = [before, after].map(({ network }) => ({
    volume: network.units.unitFor(dimensions.volume),
    flow: network.units.unitFor(dimensions.flow),
  }));
  const ids = new Map<string, number>();
  const [x, y] = [before.zones, after.zones].map((zones) => columnsOf(zones, ids));
  const names = [...ids.keys()];
  const size = names.length;
  const told = (key: string, rows: readonly Row[], units: readonly [Unit, Unit], plural: string): Change[] =>
    tell(key, rows, units, plural, before.at, after.at);
  const cells = changed(x.volumes, y.volumes).map(({ id, ...row }): Row => ({ name: names[id], ...row }));
  const flows = changed(x.flows(size), y.flows(size)).map(
    ({ id, ...row }): Row => ({ name: `${names[Math.floor(id / size)]} > ${names[id % size]}`, ...row }),
  );
  const follow = ({ zones }: Side): string => (zones.follow ? "inflow" : "none");
  return [
    ...(follow(before) === follow(after) ? [] : [change("follow", follow(before), follow(after), before.at, after.at)]),
    ...told("cell", cells, [a.volume, b.volume], "cells"),
    ...told("flow", flows, [a.flow, b.flow], "flows"),
  ];
}

/** SI; undefined where the table has no such row. */
interface Row {
  readonly name: string;
  readonly was: number | undefined;
  readonly is: number | undefined;
}

interface Columns {
  /** m3 by the number of a cell. */
  readonly volumes: ReadonlyMap<number, number>;
  /** m3/s by from * size + to; rows between the same two are one. */
  flows(size: number): ReadonlyMap<number, number>;
}

/** @param ids a number for each cell, inlet and outlet by its name, the same for both tables; grows */
function columnsOf({ volume, names, from, to, flow, inlets, outlets }: ZoneTable, ids: Map<string, number>): Columns {
  const idOf = (name: string): number => {
    const known = ids.get(name);
    if (known !== undefined) return known;
    ids.set(name, ids.size);
    return ids.size - 1;
  };
  const cells = Array.from(volume, (_, i) => idOf(names.nameOf(i)));
  const [ways, ends] = [inlets, outlets].map((side) => side.map((t) => idOf(t.name)));
  return {
    volumes: new Map(cells.map((id, i) => [id, volume[i]])),
    flows: (size) => {
      const sums = new Map<number, number>();
      for (let k = 0; k < flow.length; k++) {
        const a = from[k] >= 0 ? cells[from[k]] : ways[-1 - from[k]];
        const b = to[k] >= 0 ? cells[to[k]] : ends[-1 - to[k]];
        const key = a * size + b;
        sums.set(key, (sums.get(key) ?? 0) + flow[k]);
      }
      return sums;
    },
  };
}

type Moved = Omit<Row, "name"> & { readonly id: number };

function changed(before: ReadonlyMap<number, number>, after: ReadonlyMap<number, number>): Moved[] {
  const rows: Moved[] = [];
  for (const [id, is] of after) {
    const was = before.get(id);
    if (was !== undefined && Math.abs(is - was) <= rounding * Math.max(Math.abs(is), Math.abs(was))) continue;
    rows.push({ id, was, is });
  }
  for (const [id, was] of before) if (!after.has(id)) rows.push({ id, was, is: undefined });
  return rows;
}

function tell(
  key: string,
  rows: readonly Row[],
  [before, after]: readonly [Unit, Unit],
  plural: string,
  beforeAt: Span,
  afterAt: Span,
): Change[] {
  const size = ({ was = 0, is = 0 }: Row): number => Math.abs(is - was);
  const sorted = [...rows].sort((p, q) => size(q) - size(p));
  const text = (si: number | undefined, unit: Unit): string =>
    si === undefined ? "none" : formatQuantity(si, unit, 6);
  const shown = sorted
    .slice(0, mostTold)
    .map(({ name, was, is }) => change(`${key} ${name}`, text(was, before), text(is, after), beforeAt, afterAt));
  const more = sorted.length - shown.length;
  if (more <= 0) return shown;
  const rest = sorted.slice(mostTold);
  const added = rest.filter((r) => r.was === undefined).length;
  const gone = rest.filter((r) => r.is === undefined).length;
  const how = `${added} added, ${gone} removed, ${more - added - gone} changed`;
  return [...shown, change(`${more} more ${plural}`, "as they were", how, beforeAt, afterAt)];
}
