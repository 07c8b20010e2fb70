import type { TableData } from "./plotted.js";
import type { FlowSheet } from "./sheet.js";

/** Bodies and streams of a flow diagram as a table, in the units that it is drawn in. */
export function sheetTable({ bodies, streams, units }: FlowSheet): TableData {
  return {
    head: ["what", "name", "to", "value", "unit"],
    rows: [
      ...bodies
        .filter((b) => b.volume > 0)
        .map((b) => [b.role, b.label ?? b.name, "", b.volume / units.volume.factor, units.volume.name]),
      ...streams.map((s) => [s.role, s.from, s.to, s.flow / units.flow.factor, units.flow.name]),
    ],
  };
}
