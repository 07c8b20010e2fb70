import { CsvError, parse } from "csv-parse/sync";
import type { Report } from "../problems/report.js";
import type { Source, Span } from "../text/source.js";
import { isText } from "./is-text.js";

/** How a CSV file is written, where a document says so; what it leaves open is found out from the file. */
export interface CsvOptions {
  readonly separator?: string;
  readonly decimal?: "comma" | "point";
  /** 1-based line of the header; 0: the file has none. */
  readonly header?: number;
  /** Words that stand for a missing value, besides the common ones. */
  readonly missing?: readonly string[];
}

/** A CSV file cut into cells. `line` is the 1-based line on which a row ends, as editors count. */
export interface CsvTable {
  readonly source: Source;
  readonly separator: string;
  readonly rows: readonly CsvRow[];
}

export interface CsvRow {
  readonly cells: readonly string[];
  readonly line: number;
}

/** Cuts a CSV text into cells. Blank lines and lines that begin with `#` are skipped. Reports and gives undefined where it cannot. */
export function readCsv(source: Source, options: CsvOptions, report: Report): CsvTable | undefined {
  const all: Span = { source, from: 0, to: 0 };
  if (source.text.trim() === "") {
    report("csv-empty", all, { file: source.path });
    return undefined;
  }
  if (!isText(source.text)) {
    report("csv-not-text", all, { file: source.path });
    return undefined;
  }
  const separator = options.separator ?? separatorOf(source.text);
  const rows = source.text.includes('"') ? quotedRows(source, separator, report) : plainRows(source.text, separator);
  if (rows?.length === 0) report("csv-empty", all, { file: source.path });
  return rows && rows.length > 0 ? { source, separator, rows } : undefined;
}

/** Without quotation marks a table is its lines, cut at the separator: ten times as fast as the general way. */
export function plainRows(text: string, separator: string): CsvRow[] {
  const rows: CsvRow[] = [];
  const comment = separator === "\t" ? /^[^\S\t]*#/ : /^\s*#/;
  for (const [i, line] of text.split(/\r\n|\n|\r/).entries()) {
    if (line === "" || comment.test(line)) continue;
    const cells = line.split(separator);
    for (let c = 0; c < cells.length; c++) cells[c] = cells[c].trim();
    if (cells.length > 1 || cells[0] !== "") rows.push({ cells, line: i + 1 });
  }
  return rows;
}

/** With quotation marks a cell may hold separators and line breaks. Undefined where one is never closed; reported. */
export function quotedRows(source: Source, separator: string, report: Report): CsvRow[] | undefined {
  try {
    const records = parse(source.text, {
      delimiter: separator,
      record_delimiter: ["\r\n", "\n", "\r"],
      comment: "#",
      comment_no_infix: true,
      skip_empty_lines: true,
      relax_column_count: true,
      relax_quotes: true,
      trim: true,
      info: true,
    }) as unknown as { record: string[]; info: { lines: number } }[];
    return records.map(({ record, info }) => ({ cells: record, line: info.lines }));
  } catch (error) {
    if (!(error instanceof CsvError)) throw error;
    // The count at the error is where the file ended; the message names the line of the quotation mark.
    const line = Number(/at line (\d+)/.exec(error.message)?.[1] ?? 1);
    report("csv-quote", lineSpan(source, line), { line });
    return undefined;
  }
}

const candidates = [";", "\t", "|", ","];

/**
 * The separator that cuts most of the first lines into the same number of cells. A comma comes last, since beside
 * another separator it is a decimal comma.
 */
export function separatorOf(text: string): string {
  const lines = text
    .slice(0, 20_000)
    .split(/\r\n|\n|\r/)
    .filter((line) => line.trim() !== "" && !line.startsWith("#"))
    .slice(0, 40);
  for (const candidate of candidates) {
    const counts = lines.map((line) => line.replace(/"[^"]*"/g, "").split(candidate).length - 1);
    const last = counts.slice(Math.floor(counts.length / 2));
    const usual = last[Math.floor(last.length / 2)] ?? 0;
    if (usual > 0 && counts.filter((n) => n === usual).length * 2 >= counts.length) return candidate;
  }
  return ",";
}

/** The place of one cell (0-based column), for the caret under it; the whole line where the cell is not there. */
export function cellSpan(table: CsvTable, row: CsvRow, column: number): Span {
  const line = lineSpan(table.source, row.line);
  const text = table.source.text.slice(line.from, line.to);
  let cell = 0;
  let quoted = false;
  let from = 0;
  for (let i = 0; i <= text.length; i++) {
    if (text[i] === '"') quoted = !quoted;
    if (i < text.length && (quoted || !text.startsWith(table.separator, i))) continue;
    if (cell === column) {
      const body = text.slice(from, i);
      const start = from + (body.length - body.trimStart().length);
      const end = from + body.trimEnd().length;
      return { source: table.source, from: line.from + start, to: line.from + Math.max(start, end) };
    }
    cell++;
    from = i + table.separator.length;
  }
  return line;
}

/** The span of a 1-based line, its line break left out. */
export function lineSpan(source: Source, line: number): Span {
  const breaks = /\r\n|\n|\r/g;
  let from = 0;
  for (let n = 1; n < line; n++) {
    if (breaks.exec(source.text) === null) break;
    from = breaks.lastIndex;
  }
  const end = breaks.exec(source.text)?.index ?? source.text.length;
  return { source, from, to: end };
}
