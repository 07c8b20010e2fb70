import type { Report } from "../problems/report.js";
import type { Source, Span } from "../text/source.js";
import { formatNumber } from "../units/format.js";
import { inUnit, type Unit } from "../units/unit.js";
import { type ClockFormat, guessClock } from "./clock.js";
import { type CsvOptions, type CsvRow, type CsvTable, cellSpan, lineSpan, readCsv } from "./csv.js";
import { countWrong, dataRows, decimalOf, isMissing, readNumber, type Wrong, wrongAt } from "./table.js";

/** A column pair of a table: s and SI value, with the file's own row number for each point. */
export interface Series {
  readonly file: string;
  readonly at: Span;
  readonly time: Float64Array;
  readonly value: Float64Array;
  readonly row: Int32Array;
  readonly timeUnit: Unit;
  readonly valueUnit: Unit;
  /** Rows whose value was a declared word for missing, or empty. */
  readonly missing: number;
  /** A second value of each row, SI: the temperature of the sample. */
  readonly beside?: Float64Array;
}

/** What a document says of a table over time. Without unit and format, the times must give their own format away. */
export interface SeriesSpec {
  readonly file: string;
  readonly at: Span;
  readonly time: { readonly column: string | number; readonly at: Span; readonly unit: Unit | undefined };
  readonly format: ClockFormat | undefined;
  readonly value: { readonly column: string | number; readonly at: Span; readonly unit: Unit };
  /** A second column of values: a row that has none counts as missing. */
  readonly beside?: { readonly column: string | number; readonly at: Span; readonly unit: Unit } | undefined;
  readonly csv: CsvOptions;
  /** The unit that clock times are shown in. */
  readonly shownTime: Unit;
}

/** A series, and how its clock was written (undefined: elapsed time). */
export interface ReadSeries {
  readonly series: Series;
  readonly clock: ClockFormat | undefined;
}

/**
 * Reads a time and a value column. Clock times become seconds since midnight of the first day, dates seconds since
 * 1970-01-01. Every fault is reported with the line of the file; then there is no series.
 */
export function readSeries(source: Source, spec: SeriesSpec, report: Report): ReadSeries | undefined {
  const table = readCsv(source, spec.csv, report);
  const asked = [spec.time, spec.value, ...(spec.beside ? [spec.beside] : [])];
  const data = table && dataRows(table, asked, spec.csv, report);
  if (!table || !data) return undefined;
  const decimal = decimalOf(table, data, spec.csv);
  const [timeColumn, valueColumn, besideColumn] = data.columns;
  const clock = spec.time.unit ? undefined : (spec.format ?? guessFormat(table, data.rows, timeColumn, spec, report));
  if (!clock && !spec.time.unit) return undefined;
  const readTime = (cell: string): number | undefined => {
    if (clock) return clock.read(cell);
    const number = readNumber(cell, decimal);
    return number === undefined || !spec.time.unit ? undefined : number * spec.time.unit.factor;
  };

  const rows = data.rows.filter(({ cells }) => cells.some((cell) => cell !== ""));
  const time = new Float64Array(rows.length);
  const value = new Float64Array(rows.length);
  const row = new Int32Array(rows.length);
  const beside = new Float64Array(spec.beside ? rows.length : 0);
  const { factor, offset } = spec.value.unit;
  let [n, missing, shift, last] = [0, 0, 0, Number.NEGATIVE_INFINITY];
  let notTime: Wrong | undefined;
  let notNumber: Wrong | undefined;
  let back: Wrong | undefined;
  let twice: Wrong | undefined;
  let [backFrom, backTo, twiceAt] = [0, 0, 0];
  for (const r of rows) {
    const timeCell = r.cells[timeColumn] ?? "";
    const valueCell = r.cells[valueColumn] ?? "";
    const read = readTime(timeCell);
    if (read === undefined) {
      notTime = countWrong(notTime, r, timeColumn);
      continue;
    }
    let t = read + shift;
    // A clock without a date that falls by more than half a day has passed midnight.
    if (clock && !clock.dated && t < last - 43_200) {
      shift += 86_400;
      t += 86_400;
    }
    if (t < last) {
      if (!back) [backFrom, backTo] = [last, t];
      back = countWrong(back, r, timeColumn);
    } else if (t === last) {
      if (!twice) twiceAt = t;
      twice = countWrong(twice, r, timeColumn);
    }
    last = t;
    const besideCell = spec.beside ? (r.cells[besideColumn] ?? "") : "0";
    if (isMissing(valueCell, spec.csv) || isMissing(besideCell, spec.csv)) {
      missing++;
      continue;
    }
    const number = readNumber(valueCell, decimal);
    const second = readNumber(besideCell, decimal);
    if (number === undefined || !Number.isFinite(number)) {
      notNumber = countWrong(notNumber, r, valueColumn);
      continue;
    }
    if (second === undefined || !Number.isFinite(second)) {
      notNumber = countWrong(notNumber, r, besideColumn);
      continue;
    }
    if (spec.beside) beside[n] = second * spec.beside.unit.factor + spec.beside.unit.offset;
    time[n] = t;
    value[n] = number * factor + offset;
    row[n] = r.line;
    n++;
  }

  const cell = ({ row: r, column }: Wrong): string => r.cells[column] ?? "";
  const show = (t: number): string => showTime(t, clock, spec.time.unit);
  if (notTime) {
    const format = clock?.text ?? "a number";
    report("cell-not-time", wrongAt(table, notTime), {
      text: cell(notTime),
      format,
      row: notTime.row.line,
      others: notTime.others,
    });
  }
  if (notNumber) {
    report("cell-not-number", wrongAt(table, notNumber), {
      text: cell(notNumber),
      row: notNumber.row.line,
      others: notNumber.others,
    });
  }
  if (back) {
    report("time-back", wrongAt(table, back), {
      row: back.row.line,
      before: show(backFrom),
      now: show(backTo),
      others: back.others,
    });
  }
  if (twice) {
    report("time-twice", wrongAt(table, twice), { row: twice.row.line, time: show(twiceAt), others: twice.others });
  }
  if (notTime || notNumber || back) return undefined;
  if (n < 3) {
    const end = table.rows[table.rows.length - 1].line;
    report("points-few", lineSpan(source, end), { points: n, missing });
    return undefined;
  }
  const series: Series = {
    file: spec.file,
    at: spec.at,
    time: time.slice(0, n),
    value: value.slice(0, n),
    row: row.slice(0, n),
    timeUnit: spec.time.unit ?? spec.shownTime,
    valueUnit: spec.value.unit,
    missing,
    ...(spec.beside ? { beside: beside.slice(0, n) } : {}),
  };
  return { series, clock };
}

/** The format that the first time gives away; reports where it gives none, or two. */
function guessFormat(
  table: CsvTable,
  rows: readonly CsvRow[],
  column: number,
  spec: SeriesSpec,
  report: Report,
): ClockFormat | undefined {
  const first = rows.find(({ cells }) => (cells[column] ?? "") !== "");
  const text = first?.cells[column] ?? "";
  const guess = guessClock(text);
  if (guess === "ambiguous" && first) report("date-ambiguous", cellSpan(table, first, column), { text });
  else if (guess === undefined) report("unit-missing", spec.time.at, { column: String(spec.time.column) });
  return guess === "ambiguous" ? undefined : guess;
}

/** A time on a series' clock as people read it: 09:14:20, 2024-03-05 09:14:20, 12.5 min. */
export function showTime(t: number, clock: ClockFormat | undefined, unit: Unit | undefined): string {
  if (!clock) return unit ? `${formatNumber(inUnit(t, unit), 6)} ${unit.name}` : `${formatNumber(t, 6)} s`;
  if (clock.dated) return new Date(t * 1000).toISOString().replace("T", " ").slice(0, 19);
  const two = (x: number): string => String(Math.floor(x)).padStart(2, "0");
  return `${two(t / 3600)}:${two((t / 60) % 60)}:${two(t % 60)}`;
}
