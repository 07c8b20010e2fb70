import type { Report } from "../problems/report.js";
import type { Source, Span } from "../text/source.js";
import { isUnitFault, parseUnit } from "../units/parse.js";
import { numberAt, textOf } from "./cells.js";
import { type CsvOptions, type CsvRow, type CsvTable, readCsv } from "./csv.js";
import { decodeText } from "./decode.js";
import { type ColumnName, type DataRows, dataRows, decimalOf } from "./table.js";

/** Visits a row: cell i of the columns asked stands at bytes[bounds[2 i], bounds[2 i + 1]); the array is used again. */
export type RowVisitor = (bounds: Int32Array) => void;

/**
 * A table of millions of rows, read as it lies in memory: no string and no object per row or cell. The small top of it
 * is read as every other table, to find header, columns, separator and decimal sign.
 */
export interface WideCsv {
  readonly bytes: Uint8Array;
  /** At most so many rows of data. */
  readonly mostRows: number;
  /** Every row of data in order. Blank lines, rows of empty cells and lines that begin with `#` are passed over. */
  each(visit: RowVisitor): void;
  /** The number in a cell; NaN where none stands there. */
  number(from: number, to: number): number;
  /** The place of a cell, for a problem. */
  span(from: number, to: number): Span;
}

/** The top of a table, in which its form is looked for, bytes. */
const topSize = 65_536;

/**
 * Opens a table of which some columns are wanted. Reports and gives undefined where that cannot be.
 * @param again reads the content once more when a message shows some of it, so that nobody need keep it so long
 */
export function openWideCsv(
  path: string,
  content: string | Uint8Array,
  asked: readonly ColumnName[],
  options: CsvOptions,
  report: Report,
  again: () => string | Uint8Array | undefined,
): WideCsv | undefined {
  const { bytes, plain } = plainBytes(content);
  const source = lazySource(path, again);
  const top = topOf(bytes);
  const table = readCsv({ path, text: textOf(bytes, 0, top) }, options, report);
  const data = table && dataRows(table, asked, options, report);
  if (!table || !data) return undefined;
  if (data.rows.length === 0) {
    report("csv-empty", { source, from: 0, to: 0 }, { file: path });
    return undefined;
  }
  const before = lastBefore(table, data, asked);
  const start = before ? startOfLine(bytes, before.line + 1) : 0;
  const separator = new TextEncoder().encode(table.separator);
  const point = decimalOf(table, data, options) === "comma" ? comma : dot;
  return {
    bytes,
    mostRows: linesAfter(bytes, start),
    each: (visit) => scan(bytes, start, separator, Int32Array.from(data.columns), visit),
    number: (from, to) => numberAt(bytes, from, to, point),
    span: (from, to) => {
      if (plain) return { source, from, to: Math.max(from + 1, to) };
      const before = textOf(bytes, 0, from).length;
      return { source, from: before, to: before + Math.max(1, textOf(bytes, from, to).length) };
    },
  };
}

/**
 * The row before the data, which begin behind the line on which it ends. What was taken for a row of units, since no cell
 * of it is a number, is one only where a unit stands in it: names of cells look much the same.
 */
function lastBefore(table: CsvTable, data: DataRows, asked: readonly ColumnName[]): CsvRow | undefined {
  const first = table.rows.indexOf(data.rows[0]);
  const before = table.rows[first - 1];
  if (!before || asked.every(({ column }, i) => column === before.cells[data.columns[i]])) return before;
  const isUnit = (cell = ""): boolean => cell !== "" && !isUnitFault(parseUnit(cell.replace(/^[[(]|[\])]$/g, "")));
  const units = asked.some(({ unit }, i) => unit && isUnit(before.cells[data.columns[i]]));
  return units || first < 2 ? before : table.rows[first - 2];
}

/** UTF-8 without a byte-order mark. A table in plain ASCII, as most are, is taken as it is: a letter a byte. */
function plainBytes(content: string | Uint8Array): { bytes: Uint8Array; plain: boolean } {
  if (typeof content !== "string" && isAscii(content)) return { bytes: content, plain: true };
  return { bytes: new TextEncoder().encode(decodeText(content)), plain: false };
}

function isAscii(content: Uint8Array): boolean {
  for (let i = 0; i < content.length; i++) if (content[i] >= 128) return false;
  return true;
}

/** The text is made when a message shows it. */
function lazySource(path: string, read: () => string | Uint8Array | undefined): Source {
  let text: string | undefined;
  return {
    path,
    get text() {
      text ??= decodeText(read() ?? "");
      return text;
    },
  };
}

/** The end of the last whole line within the top. */
function topOf(bytes: Uint8Array): number {
  if (bytes.length <= topSize) return bytes.length;
  const end = bytes.lastIndexOf(feed, topSize);
  return end > 0 ? end : topSize;
}

/** Byte at which a 1-based line begins. */
function startOfLine(bytes: Uint8Array, line: number): number {
  let at = 0;
  for (let n = 1; n < line && at < bytes.length; at++) if (endsLine(bytes, at)) n++;
  return at;
}

function linesAfter(bytes: Uint8Array, start: number): number {
  let lines = 1;
  for (let i = start; i < bytes.length; i++) if (endsLine(bytes, i)) lines++;
  return lines;
}

const endsLine = (bytes: Uint8Array, i: number): boolean =>
  bytes[i] === feed || (bytes[i] === carriage && bytes[i + 1] !== feed);

/** Cuts rows and hands on the cells asked for, spaces and quotation marks around them left out. */
function scan(bytes: Uint8Array, start: number, separator: Uint8Array, columns: Int32Array, visit: RowVisitor): void {
  const bounds = new Int32Array(2 * columns.length);
  const size = bytes.length;
  const [cut] = separator;
  const single = separator.length === 1;
  const isCut = (i: number): boolean => single || separator.every((byte, k) => bytes[i + k] === byte);
  let i = start;
  while (i < size) {
    while (i < size && (bytes[i] === space || (bytes[i] === tab && cut !== tab))) i++;
    if (bytes[i] === hash) {
      while (i < size && bytes[i] !== feed && bytes[i] !== carriage) i++;
      i++;
      continue;
    }
    bounds.fill(0);
    let filled = false;
    for (let column = 0, more = true; more; column++) {
      let from = i;
      while (bytes[from] === space || (bytes[from] === tab && cut !== tab)) from++;
      let to: number;
      if (bytes[from] === quote) {
        to = closing(bytes, ++from);
        i = to + 1;
        while (i < size && bytes[i] !== feed && bytes[i] !== carriage && !(bytes[i] === cut && isCut(i))) i++;
      } else {
        i = from;
        let c = bytes[i];
        while (i < size && c !== feed && c !== carriage && !(c === cut && isCut(i))) c = bytes[++i];
        to = i;
        while (to > from && (bytes[to - 1] === space || bytes[to - 1] === tab)) to--;
      }
      if (to > from) filled = true;
      for (let a = 0; a < columns.length; a++) {
        if (columns[a] !== column) continue;
        bounds[2 * a] = from;
        bounds[2 * a + 1] = to;
      }
      more = i < size && bytes[i] === cut;
      i += more ? separator.length : 1;
    }
    if (filled) visit(bounds);
  }
}

/** The quotation mark that closes a cell; two together are one of its text. */
function closing(bytes: Uint8Array, from: number): number {
  for (let i = from; i < bytes.length; i++) {
    if (bytes[i] !== quote) continue;
    if (bytes[i + 1] !== quote) return i;
    i++;
  }
  return bytes.length;
}

const tab = 9;
const feed = 10;
const carriage = 13;
const space = 32;
const quote = 34;
const hash = 35;
const comma = 44;
const dot = 46;
