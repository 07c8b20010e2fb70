import type { Report } from "../problems/report.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";
import { sameDimension } from "../units/dimension.js";
import { isUnitFault, parseUnit } from "../units/parse.js";
import type { Unit } from "../units/unit.js";
import { guessClock } from "./clock.js";
import { type CsvOptions, type CsvRow, type CsvTable, cellSpan, lineSpan } from "./csv.js";
import { correctedLine, cutOff, quote, restOfLine } from "./lines.js";

/** A column as a document names it: by its header, or by its position from 1. */
export interface ColumnName {
  readonly column: string | number;
  readonly at: Span;
  readonly unit: Unit | undefined;
}

/** Where the data of a table stand. */
export interface DataRows {
  /** 0-based positions, in the order asked. */
  readonly columns: readonly number[];
  readonly rows: readonly CsvRow[];
}

/**
 * Finds the header, the columns asked for and the first row of data. Without a declared header line it is the first row
 * that holds every header asked for; with positions alone, the first row if it holds neither time nor number. A row of
 * units under the header is passed over, and compared with the declared ones.
 * @returns undefined where a column is not there, or a row does not fit the headers; reported
 */
export function dataRows(
  table: CsvTable,
  asked: readonly ColumnName[],
  options: CsvOptions,
  report: Report,
): DataRows | undefined {
  const header = headerIndex(table, asked, options, report);
  if (header === undefined) return undefined;
  const columns = asked.map((name) => position(table, header, name, report));
  if (columns.includes(-1)) return undefined;
  let first = header + 1;
  const under = table.rows[first];
  const units = header >= 0 && under !== undefined && columns.every((c) => isWord(under.cells[c] ?? "", options));
  if (units) first++;
  for (const [i, name] of asked.entries()) {
    if (header >= 0)
      compareUnit(name, table.rows[header].cells[columns[i]] ?? "", units ? under.cells[columns[i]] : "", report);
  }
  const rows = table.rows.slice(first);
  const headers = table.rows[Math.max(0, header)].cells.length;
  return reportWidths(table, rows, headers, columns, asked, report) ? undefined : { columns, rows };
}

/**
 * Rows that were cut into more cells than there are headers (a decimal comma beside commas), or that end before a column
 * asked for, would be read as something else in silence. Empty cells beyond the last header do no harm.
 * @returns whether there is one; reported
 */
function reportWidths(
  table: CsvTable,
  rows: readonly CsvRow[],
  headers: number,
  columns: readonly number[],
  asked: readonly ColumnName[],
  report: Report,
): boolean {
  let long: Wrong | undefined;
  let short: Wrong | undefined;
  const need = Math.max(...columns);
  for (const row of rows) {
    const { length } = row.cells;
    if (length > headers) {
      const extra = row.cells.findIndex((cell, i) => i >= headers && cell !== "");
      if (extra >= 0) long = countWrong(long, row, extra);
    } else if (length <= need && row.cells.some((cell) => cell !== "")) {
      short = countWrong(short, row, length - 1);
    }
  }
  if (long) {
    const { row, others } = long;
    const data = { row: row.line, cells: row.cells.length, headers, separator: table.separator, others };
    report("row-long", wrongAt(table, long), data);
  }
  if (short) {
    const { row, others } = short;
    const cut = columns.findIndex((c) => c >= row.cells.length);
    const data = { row: row.line, cells: row.cells.length, column: String(asked[cut].column), others };
    report("row-short", wrongAt(table, short), data);
  }
  return long !== undefined || short !== undefined;
}

/** Index of the header row, -1 where there is none. */
function headerIndex(
  table: CsvTable,
  asked: readonly ColumnName[],
  options: CsvOptions,
  report: Report,
): number | undefined {
  if (options.header === 0) return -1;
  if (options.header !== undefined) {
    const line = options.header;
    const at = table.rows.findIndex((row) => row.line >= line);
    if (at >= 0) return at;
    const last = table.rows[table.rows.length - 1].line;
    report("header-missing", lineSpan(table.source, last), { line, last });
    return undefined;
  }
  const headers = asked.flatMap(({ column }) => (typeof column === "string" ? [column] : []));
  if (headers.length > 0) {
    const at = table.rows.findIndex((row) => headers.every((h) => row.cells.includes(h)));
    if (at >= 0) return at;
    const some = table.rows.findIndex((row) => headers.some((h) => row.cells.includes(h)));
    return Math.max(0, some);
  }
  const first = table.rows[0];
  const words = asked.every(({ column }) => isWord(first.cells[Number(column) - 1] ?? "", options));
  return words ? 0 : -1;
}

/** `column: Cond #1` as it should have been written, where a column has the whole name or the name looks cut. */
function uncut(column: string, at: Span, headers: readonly string[]): string | undefined {
  const cut = cutOff(at);
  const rest = restOfLine(at.source.text, at.to);
  const own = headers.find(
    (h) => h.startsWith(`${column} `) && h.includes("#") && rest.startsWith(h.slice(column.length)),
  );
  const whole = own ?? (cut && column + cut);
  const line = { ...at, to: at.to + rest.length };
  return whole && correctedLine(line, quote(whole));
}

/** 0-based position of a column, -1 where it is not there; reported. */
function position(table: CsvTable, header: number, { column, at }: ColumnName, report: Report): number {
  const cells = table.rows[Math.max(0, header)].cells;
  if (typeof column === "number") {
    if (column >= 1 && column <= cells.length) return column - 1;
    report("column-missing", at, { column: String(column), headers: cells, nearest: undefined, corrected: undefined });
    return -1;
  }
  const found = cells.flatMap((cell, i) => (cell === column ? [i] : []));
  if (found.length === 1) return found[0];
  if (found.length === 0) {
    report("column-missing", at, {
      column,
      headers: cells,
      nearest: nearest(column, cells),
      corrected: uncut(column, at, cells),
    });
  } else {
    report("column-twice", at, { column, positions: found.map((i) => i + 1) });
  }
  return -1;
}

const common = new Set([
  "",
  "-",
  "--",
  "---",
  "nan",
  "na",
  "n/a",
  "n.a.",
  "#n/a",
  "#na",
  "#value!",
  "#div/0!",
  "null",
  "none",
  "nil",
  "bad",
  "no data",
  "missing",
]);

/** True for an empty cell, the common words for a missing value, and the declared ones; case does not count. */
export function isMissing(cell: string, options: CsvOptions): boolean {
  const word = cell.trim().toLowerCase();
  return common.has(word) || (options.missing?.some((m) => m.trim().toLowerCase() === word) ?? false);
}

/** The number in a cell; undefined where it is none. */
export function readNumber(cell: string, decimal: "comma" | "point"): number | undefined {
  const text = decimal === "comma" ? cell.replace(",", ".") : cell;
  if (decimal === "comma" && cell.includes(".")) return undefined;
  return /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/.test(text) ? Number(text) : undefined;
}

/**
 * Comma or point. In a file whose separator is a comma it is the point; in others the comma, if some number of these
 * columns has one and none has a point.
 */
export function decimalOf(table: CsvTable, data: DataRows, options: CsvOptions): "comma" | "point" {
  if (options.decimal) return options.decimal;
  if (table.separator === ",") return "point";
  let comma = false;
  for (const { cells } of data.rows) {
    for (const c of data.columns) {
      const cell = cells[c] ?? "";
      if (/^[+-]?\d+\.\d*(?:[eE][+-]?\d+)?$/.test(cell)) return "point";
      comma ||= /^[+-]?\d+,\d+(?:[eE][+-]?\d+)?$/.test(cell);
    }
  }
  return comma ? "comma" : "point";
}

/** A word: no number, no clock time or date, and not a word for a missing value. */
const isWord = (cell: string, options: CsvOptions): boolean =>
  !/^[+-]?[.,]?\d/.test(cell) && guessClock(cell) === undefined && (cell === "" || !isMissing(cell, options));

/** A unit in a header, as `Cond [mS/cm]` or `Cond (mS/cm)`, or in the row under it, that is not the declared one. */
function compareUnit(
  { column, at, unit }: ColumnName,
  header: string,
  under: string | undefined,
  report: Report,
): void {
  const inHeader = /[[(]([^\])]+)[\])]\s*$/.exec(header)?.[1] ?? "";
  for (const says of [under?.replace(/^[[(]|[\])]$/g, "") ?? "", inHeader]) {
    const found = parseUnit(says.trim());
    if (!unit || says === "" || isUnitFault(found)) continue;
    const same = sameDimension(found.dimension, unit.dimension) && Math.abs(found.factor / unit.factor - 1) < 1e-9;
    if (same) return;
    report("column-unit", at, { column: String(column), says: says.trim(), declared: unit.name });
    return;
  }
}

/** One problem for all cells of a column that are wrong the same way: the first is shown, the others are counted. */
export interface Wrong {
  readonly row: CsvRow;
  readonly column: number;
  others: number;
}

/** Counts one more wrong cell. */
export function countWrong(wrong: Wrong | undefined, row: CsvRow, column: number): Wrong {
  if (!wrong) return { row, column, others: 0 };
  wrong.others++;
  return wrong;
}

/** The caret for it. */
export const wrongAt = (table: CsvTable, { row, column }: Wrong): Span => cellSpan(table, row, column);
