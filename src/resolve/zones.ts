import type { ZoneTable } from "../compartments/zone-table.js";
import type { Stream } from "../model/network.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { openTable } from "../read/open.js";
import { beside } from "../read/paths.js";
import type { ColumnName } from "../read/table.js";
import { child, type MapNode, type Tree, textOf } from "../read/tree.js";
import { openWideCsv, type WideCsv } from "../read/wide-csv.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";
import { type Basis, inBasis } from "../units/basis.js";
import { type Dimension, dimensions } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";
import { column, csvOptions } from "./table-keys.js";
import { nowhere } from "./unknown.js";
import { resolveUnit } from "./value.js";
import { balanceZones } from "./zone-balance.js";
import { readCells, readFlows } from "./zone-cells.js";

/** How far a cell may be out of balance where the document does not say, relative. */
export const defaultTolerance = 1e-9;

/**
 * Reads the tables of a zoned body and brings its cells into balance.
 * @param node its entry in the document, whose shape is right
 * @returns undefined where something is wrong; reported
 */
export function resolveZones(
  name: string,
  at: Span,
  node: MapNode,
  tolerance: number,
  basis: Basis,
  files: Files,
  report: Report,
): ZoneTable | undefined {
  const open = (key: "volumes" | "flows", roles: readonly string[], amount: string, dimension: Dimension) => {
    const spec = child(node, key);
    const unit = resolveUnit(child(child(spec, amount), "unit"), dimension, report);
    const asked = roles.map((role): ColumnName | undefined => {
      const named = column(child(spec, role), child(spec, role) ?? node);
      return named && { ...named, unit: role === amount ? unit : undefined };
    });
    const table = openColumns(spec, asked, files, report);
    return table && unit ? { table, unit } : undefined;
  };
  const volumes = open("volumes", ["id", "volume"], "volume", inBasis(dimensions.volume, basis));
  const flows = open("flows", ["from", "to", "flow"], "flow", inBasis(dimensions.flow, basis));
  const cells = volumes && readCells(volumes.table, volumes.unit.factor, report);
  const rows = cells && flows && readFlows(flows.table, cells, flows.unit.factor, report);
  if (!rows) return undefined;
  const balanced = balanceZones(
    cells,
    rows,
    {
      name,
      at,
      follow: textOf(child(node, "flows"), "follow") === "inflow",
      tolerance,
      flowUnit: flows.unit,
      volumeUnit: volumes.unit,
    },
    report,
  );
  const line = (key: string): Span => node.entries.find((e) => e.key.text === key)?.key.at ?? at;
  return balanced && { ...balanced, at: { volumes: line("volumes"), flows: line("flows") } };
}

function openColumns(
  spec: Tree | undefined,
  asked: readonly (ColumnName | undefined)[],
  files: Files,
  report: Report,
): WideCsv | undefined {
  const fileNode = child(spec, "file");
  const file = textOf(spec, "file");
  if (!fileNode || file === undefined) return undefined;
  const path = beside(fileNode.at.source.path, file);
  const content = openTable(path, { text: file, at: fileNode.at }, files, report);
  const columns = asked.filter((c) => c !== undefined);
  if (content === undefined || columns.length < asked.length) return undefined;
  return openWideCsv(path, content, columns, csvOptions(child(spec, "csv")), report, () => files.read(path));
}

/**
 * The streams out of a zoned body: a `to:` gives each outlet of its table a destination, or one to the only outlet.
 * How the outflow divides is told by the table.
 */
export function zoneStreams(name: string, to: Tree | undefined, zones: ZoneTable, report: Report): Stream[] {
  if (!to || to.type === "list" || (to.type === "scalar" && to.empty)) return [];
  const { outlets } = zones;
  const known = outlets.map((t) => t.name);
  if (to.type === "scalar") {
    if (outlets.length === 1) return [{ to: to.text, at: to.at, split: { is: "all" }, leaves: known[0] }];
    report("zone-outlets", to.at, { name, outlets: known, to: to.text }, { at: outlets[1].at, says: "this one, say" });
    return [nowhere(to.at)];
  }
  const total = outlets.reduce((sum, t) => sum + t.flow, 0);
  const streams: Stream[] = [];
  for (const { key, value } of to.entries) {
    const outlet = outlets.find((t) => t.name === key.text);
    if (!outlet) {
      streams.push(nowhere(key.at));
      const near = nearest(key.text, known);
      report("zone-no-outlet", key.at, { name, outlet: key.text, known, nearest: near });
    } else if (value.type === "scalar") {
      const share = outlet.flow / total;
      const split =
        outlets.length === 1 ? ({ is: "all" } as const) : { is: "share" as const, value: fixed(share, key.at) };
      streams.push({ to: value.text, at: value.at, split, leaves: key.text });
    }
  }
  const allKnown = to.entries.every(({ key }) => known.includes(key.text));
  for (const { name: outlet, at } of allKnown ? outlets : []) {
    if (to.entries.some((e) => e.key.text === outlet)) continue;
    streams.push(nowhere(to.at));
    report("zone-outlet-open", to.at, { name, outlet, known }, { at, says: "the table names it here" });
  }
  return streams;
}

const bare: Unit = { name: "", factor: 1, offset: 0, dimension: dimensions.ratio };

/** A share that a table gives. */
const fixed = (share: number, at: Span): Value => ({
  at,
  dimension: dimensions.ratio,
  unit: undefined,
  expression: { type: "number", value: share, unit: bare, at: { from: 0, to: 0 } },
  uses: [],
  of: () => share,
  sd: undefined,
});

/** A body as streams that lead to it need to know it. */
interface Body {
  readonly name: string;
  readonly zones?: ZoneTable | undefined;
}

/** Streams to `core.feed`, or to `core` where there is one inlet, aimed at that inlet of the zoned body. */
export function aimStreams(streams: readonly Stream[], zoned: readonly Body[]): readonly Stream[] {
  if (zoned.length === 0) return streams;
  return streams.map((s) => {
    for (const { name, zones } of zoned) {
      const inlets = zones?.inlets ?? [];
      if (s.to === name) return inlets.length === 1 ? { ...s, enters: inlets[0].name } : s;
      const inlet = s.to.startsWith(`${name}.`) ? s.to.slice(name.length + 1) : undefined;
      if (inlets.some((t) => t.name === inlet)) return { ...s, to: name, enters: inlet };
    }
    return s;
  });
}
