/** A curve as rows of a table: points, and spikes (undispersed tracer) among them in order of time. */
export interface CsvCurve {
  readonly at: string;
  readonly time: readonly number[];
  readonly value: ArrayLike<number>;
  readonly cumulative?: ArrayLike<number>;
  readonly spikes: readonly { readonly time: number; readonly area: number }[];
}

/**
 * Curves as CSV: one row per place and time. A spike is a row of its own with its area in the column `spike`.
 * Numbers read back to the same double.
 */
export function curvesCsv(curves: readonly CsvCurve[], units: { time: string; value: string; spike: string }): string {
  const header = ["at", `time [${units.time}]`, `value [${units.value}]`, "cumulative", `spike [${units.spike}]`];
  const rows = curves.flatMap(({ at, time, value, cumulative, spikes }) => {
    const points = time.map((t, i) => ({ t, cells: [at, t, value[i], cumulative?.[i] ?? "", ""] }));
    const marks = spikes.map((s) => ({ t: s.time, cells: [at, s.time, "", "", s.area] }));
    return [...points, ...marks].sort((a, b) => a.t - b.t).map(({ cells }) => cells);
  });
  return `${[header, ...rows].map((cells) => cells.map(cell).join(",")).join("\n")}\n`;
}

function cell(content: string | number): string {
  const text = typeof content === "number" && !Number.isFinite(content) ? "" : String(content);
  return /[",\n\r]/.test(text) ? `"${text.replace(/"/g, '""')}"` : text;
}

/** A table of columns that may be long: a name in front, then numbers. Numbers read back to the same double. */
export function columnsCsv(
  header: readonly string[],
  size: number,
  nameOf: (row: number) => string,
  number: (row: number, column: number) => number,
): string {
  const lines = [header.map(cell).join(",")];
  for (let row = 0; row < size; row++) {
    let line = cell(nameOf(row));
    for (let column = 1; column < header.length; column++) line += `,${cell(number(row, column - 1))}`;
    lines.push(line);
  }
  return `${lines.join("\n")}\n`;
}
