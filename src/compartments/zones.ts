import { choice, column, either, name, named, record, text, whole } from "../schema/documents/common.js";
import type { KeyShape } from "../schema/shape.js";
import { zonesBody } from "../svg/zones-body.js";
import type { CompartmentKind, Member, Ports } from "./kind.js";

const file: KeyShape = {
  shape: text,
  says: "The CSV file, relative to this document.",
  required: true,
  example: "flows.csv",
};

const unit = (what: string, example: string): KeyShape => ({
  shape: text,
  says: `The unit of the ${what} in that column.`,
  required: true,
  example,
});

const csv: KeyShape = {
  says: "How the file is written, where backmix should not find out by itself.",
  example: '{decimal: comma, separator: ";", header: 3}',
  shape: record({
    decimal: { shape: choice("point", "comma"), says: "What stands before the decimals.", example: "comma" },
    separator: {
      shape: text,
      says: "What stands between columns: `,`, `;`, `tab` or any one character.",
      example: '";"',
    },
    header: { shape: whole(0), says: "The line that holds the headers, counted from 1; 0 where there is none." },
  }),
};

/** Many stirred cells and the flows between them, from tables: what is zoned from a computed flow field, say. */
export const zones: CompartmentKind = {
  name: "zones",
  says: "Many stirred cells and the flows between them, from two tables: a computed flow field cut into zones, say.",
  keys: {
    volumes: {
      says: "The table of cells: one row a cell, its name and its volume. A cell of no volume is a point where flows meet.",
      required: true,
      example: "{file: volumes.csv, id: {column: id}, volume: {column: volume_L, unit: L}}",
      shape: record({
        file: { ...file, example: "volumes.csv" },
        id: {
          shape: column("the names of the cells"),
          says: "The column of names.",
          required: true,
          example: "{column: id}",
        },
        volume: {
          shape: record({ ...columnKey("the volumes"), unit: unit("volumes", "L") }),
          says: "The column of volumes.",
          required: true,
          example: "{column: volume_L, unit: L}",
        },
        csv,
      }),
    },
    flows: {
      says: "The table of flows: one row a flow, from where to where and how much; an exchange is two rows. A name that is no cell is an inlet where it stands under `from`, and an outlet under `to`: streams enter by `core.feed`, or by `core` where there is one inlet.",
      required: true,
      example:
        "{file: flows.csv, from: {column: from}, to: {column: to}, flow: {column: flow_L_per_min, unit: L/min}, follow: inflow}",
      shape: record({
        file,
        from: {
          shape: column("the cell or inlet that a flow comes from"),
          says: "The column of where flows come from.",
          required: true,
          example: "{column: from}",
        },
        to: {
          shape: column("the cell or outlet that a flow goes to"),
          says: "The column of where flows go.",
          required: true,
          example: "{column: to}",
        },
        flow: {
          shape: record({ ...columnKey("the flows"), unit: unit("flows", "L/min") }),
          says: "The column of flows.",
          required: true,
          example: "{column: flow_L_per_min, unit: L/min}",
        },
        follow: {
          shape: choice("inflow"),
          says: "`inflow` scales the table to what enters. Without it flows are as the table has them, and what enters must be what it says.",
          example: "inflow",
        },
        csv,
      }),
    },
    tolerance: {
      shape: { is: "quantity", dimension: "ratio" },
      says: "How far what enters a cell may be from what leaves it, relative. Flows are brought into balance by the smallest relative change; above 1e-9 that is said.",
      default: "1e-9",
      example: "0.01 %",
    },
    to: {
      says: "Where the outflow goes: an outlet of the flow table with its destination each, or one destination where there is one outlet. How it divides is told by the table.",
      required: true,
      example: "{out: product}",
      shape: either(name, named(name, "free")),
    },
  },
  flows: true,
  exchanges: false,
  mayExchange: () => false,
  zoned: true,
  volume: (of) => of.zones?.volume.reduce((sum, v) => sum + v, 0) ?? 0,
  spell(maker, of): Ports | undefined {
    const table = of.zones;
    if (!table) return undefined;
    const first = maker.cells(table.volume, table.names);
    const joints = (terminals: typeof table.inlets): Member[] =>
      terminals.map((t) => ({ suffix: t.name, node: maker.joint(t.name) }));
    const [inlets, outlets] = [joints(table.inlets), joints(table.outlets)];
    const nodes = (ends: Int32Array, terminals: readonly Member[]): Int32Array =>
      ends.map((i) => (i >= 0 ? first + i : terminals[-1 - i].node));
    maker.links(nodes(table.from, inlets), nodes(table.to, outlets), table.flow);
    const only = (terminals: readonly Member[]) => (terminals.length === 1 ? terminals[0].node : undefined);
    return { entry: only(inlets), exit: only(outlets), members: [], inlets, outlets };
  },
  picture: (box) => zonesBody(box),
  aspect: () => 1.4,
};

function columnKey(what: string): Record<"column", KeyShape> {
  return {
    column: {
      shape: text,
      says: `The column that holds ${what}: its header as it stands in the file, or its position from 1.`,
      required: true,
      example: "volume_L",
    },
  };
}
