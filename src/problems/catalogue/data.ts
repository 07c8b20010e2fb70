import { type Obstacle, obstacleWords } from "../obstacle.js";
import { entry } from "../problem.js";

const meant = (nearest: string | undefined, otherwise: string): string =>
  nearest === undefined ? otherwise : `did you mean '${nearest}'?`;

const more = (others: number): string => (others === 0 ? "" : ` (and ${others} more ${others === 1 ? "row" : "rows"})`);

const cellFix = (separator: string): string =>
  separator === ","
    ? 'if commas stand before decimals, save the table with semicolons and write `csv: {decimal: comma, separator: ";"}`, or put those numbers in quotation marks'
    : "name the true `separator` in `csv:`, or put cells that hold one in quotation marks";

/** Trials and the tables that they name. Places in a table are lines of the file, as an editor counts them. */
export const dataEntries = {
  "flow-log-negative": entry({
    severity: "error",
    says: (d: { feed: string; flow: string; row: number; file: string }) =>
      `the flow of '${d.feed}' is ${d.flow} in row ${d.row} of ${d.file}: a feed does not flow back`,
    fix: "correct the zero of the meter in a copy of the log, or leave that row's cell empty: a straight line bridges it",
    example: { feed: "feed", flow: "-0.2 L/min", row: 17, file: "flow.csv" },
  }),
  "flow-log-zero": entry({
    severity: "error",
    says: (d: { feed: string; file: string }) => `nothing ever flows by the log of '${d.feed}', ${d.file}`,
    fix: "name the column that holds the flow, or give the flow as a value",
    example: { feed: "feed", file: "flow.csv" },
  }),
  "flow-log-still": entry({
    severity: "error",
    says: (d: { feed: string; file: string }) => `nothing flows at the start of the log of '${d.feed}', ${d.file}`,
    fix: "begin it with a row at which the feed flows: before the first row the flow is as in it, and what stands still has no direction",
    example: { feed: "feed", file: "flow.csv" },
  }),
  "flow-log-gap": entry({
    severity: "warning",
    says: (d: { feed: string; from: string; to: string; row: number; file: string }) =>
      `the log of '${d.feed}' has no row from ${d.from} to ${d.to} (after row ${d.row} of ${d.file})`,
    fix: "nothing need be done where the flow was steady then: a straight line is drawn across; else add what is known of it",
    example: { feed: "feed", from: "12 min", to: "47 min", row: 31, file: "flow.csv" },
  }),
  "file-missing": entry<{ file: string }>({
    severity: "error",
    says: ({ file }) => `there is no file '${file}'`,
    fix: "correct the name; it is relative to the document that names it",
  }),
  "file-unreadable": entry<{ file: string; why: Obstacle }>({
    severity: "error",
    says: ({ file, why }) => `'${file}' ${obstacleWords[why]}`,
    fix: ({ why }) =>
      why === "dangling" || why === "loop" ? "mend the link or take it away" : "name a file that may be read",
  }),
  "csv-empty": entry<{ file: string }>({
    severity: "error",
    says: ({ file }) => `'${file}' holds no data`,
    fix: "export the log again, or name another file",
  }),
  "csv-not-text": entry<{ file: string }>({
    severity: "error",
    says: ({ file }) => `'${file}' is not a text file`,
    fix: "save the sheet as CSV and name that file",
  }),
  "csv-quote": entry<{ line: number }>({
    severity: "error",
    says: ({ line }) => `a quotation mark is opened on line ${line} and never closed`,
    fix: "close it, or take it out of the text",
  }),
  "header-missing": entry<{ line: number; last: number }>({
    severity: "error",
    says: ({ line, last }) => `no header can be on line ${line}: the last row of the file is on line ${last}`,
    fix: "give `csv: {header: …}` the line of the file that holds the headers, counted from 1",
  }),
  "column-missing": entry<{
    column: string;
    headers: readonly string[];
    nearest: string | undefined;
    /** The line as it should be, where ` #` cut the name. */
    corrected: string | undefined;
  }>({
    severity: "error",
    says: ({ column, headers }) =>
      `the table has no column '${column}'; it has ${headers.map((h) => `'${h}'`).join(", ")}`,
    fix: ({ nearest, corrected }) =>
      corrected
        ? `\` #\` begins a comment: put the name in quotes, \`${corrected}\``
        : meant(nearest, "name one of these, give its position from 1, or the line of the header in `csv:`"),
  }),
  "column-twice": entry<{ column: string; positions: readonly number[] }>({
    severity: "error",
    says: ({ column, positions }) => `'${column}' heads ${positions.length} columns: ${positions.join(" and ")}`,
    fix: ({ positions }) => `name the column by its position: \`column: ${positions[0]}\``,
  }),
  "column-unit": entry<{ column: string; says: string; declared: string }>({
    severity: "warning",
    says: ({ column, says, declared }) => `the file gives '${column}' in ${says}, the document in ${declared}`,
    fix: ({ says }) => `write \`unit: ${says}\` if the file is right`,
  }),
  "unit-missing": entry<{ column: string }>({
    severity: "error",
    says: ({ column }) => `the numbers of column '${column}' have no unit`,
    fix: 'add it, such as `{column: t, unit: min}`; clock times have a format instead: `format: "h:m:s"`',
  }),
  "unit-and-format": entry<{ column: string }>({
    severity: "error",
    says: ({ column }) => `column '${column}' has both a unit and a format`,
    fix: "keep `unit` for elapsed times, or `format` for clock times and dates",
  }),
  "bad-format": entry<{ format: string }>({
    severity: "error",
    says: ({ format }) => `'${format}' is no way to write a time`,
    fix: 'build it from d M y h m s and am, as the file has them: "h:m:s", "h:m am", "d.M.y h:m"',
  }),
  "date-ambiguous": entry<{ text: string }>({
    severity: "error",
    says: ({ text }) => `day and month of '${text}' could be confused`,
    fix: 'say which is which: `format: "d/M/y h:m"` or `format: "M/d/y h:m"`',
  }),
  "row-long": entry<{ row: number; cells: number; headers: number; separator: string; others: number }>({
    severity: "error",
    says: ({ row, cells, headers, others }) =>
      `row ${row} has ${cells} cells, more than the ${headers} ${headers === 1 ? "column" : "columns"} of the table${more(others)}`,
    fix: ({ separator }) => cellFix(separator),
  }),
  "row-short": entry<{ row: number; cells: number; column: string; others: number }>({
    severity: "error",
    says: ({ row, cells, column, others }) =>
      `row ${row} ends after ${cells} ${cells === 1 ? "cell" : "cells"}: column '${column}' is cut off${more(others)}`,
    fix: "complete the row, or take it out; a missing value keeps its separator, with nothing after it",
  }),
  "cell-not-time": entry<{ text: string; format: string; row: number; others: number }>({
    severity: "error",
    says: ({ text, format, row, others }) => `row ${row}: '${text}' is no time written as ${format}${more(others)}`,
    fix: "correct the format of the time column, or the line where the table's header stands",
  }),
  "cell-not-number": entry<{ text: string; row: number; others: number }>({
    severity: "error",
    says: ({ text, row, others }) => `row ${row}: '${text}' is no number${more(others)}`,
    fix: ({ text }) =>
      /^[+-]?[\d.]*,\d+$/.test(text)
        ? "if the comma stands before decimals, write `csv: {decimal: comma}`"
        : `if it stands for a missing value, write \`csv: {missing: ["${text}"]}\``,
  }),
  "time-back": entry<{ row: number; before: string; now: string; others: number }>({
    severity: "error",
    says: ({ row, before, now, others }) => `row ${row}: time goes back from ${before} to ${now}${more(others)}`,
    fix: "put the rows in order of time; 12-hour clocks need `am` in the format, and several days a date",
  }),
  "time-twice": entry<{ row: number; time: string; others: number }>({
    severity: "warning",
    says: ({ row, time, others }) => `row ${row}: the time ${time} stands there a second time${more(others)}`,
    fix: "log times finely enough to tell samples apart, or leave one of them out",
  }),
  "points-few": entry<{ points: number; missing: number }>({
    severity: "error",
    says: ({ points, missing }) =>
      `only ${points} ${points === 1 ? "row has" : "rows have"} a value${missing > 0 ? `, ${missing} are missing` : ""}: a curve needs 3`,
    fix: "name the column that holds the readings, or a longer log",
  }),
  "clocks-mixed": entry<{ file: string; clock: string; format: string }>({
    severity: "error",
    says: ({ file, clock, format }) =>
      `'${file}' has elapsed times, '${clock}' times written as ${format}: nothing says how the two clocks fit`,
    fix: "log all readings of a trial on one clock, or make two trials",
  }),
  "nothing-read": entry<Record<string, never>>({
    severity: "error",
    says: () => "the trial says nothing of what was read",
    fix: "add `readings:`, each with its place and its table, or, in a trial with a `chemistry:`, `steady:` analyses",
  }),
  "nothing-put-in": entry<Record<never, never>>({
    severity: "error",
    says: () => "the trial puts no tracer in",
    fix: "say what went in as `injection: {at: feed, pulse: 50 g}`, or what was inside at the start as `contents: {corner: 2 g/L}`",
  }),
  "contents-unit": entry<{ at: string; amount: string; reading: string }>({
    severity: "error",
    says: ({ at, amount, reading }) =>
      `the tracer at the start is in ${amount}; the reading at '${at}' is in ${reading}`,
    fix: "write both as the same kind of concentration, give the reading a calibration, or `scale: free` where only the shape is trusted",
  }),
  "start-unclear": entry<{ text: string; example: string }>({
    severity: "error",
    says: ({ text }) => `'${text}' is neither a time as the readings write it nor an elapsed time`,
    fix: ({ example }) =>
      `write it as the readings do, such as ${example}, or as time since their first row, such as 5 min`,
  }),
  "start-late": entry<{ start: string; last: string }>({
    severity: "error",
    says: ({ start, last }) => `the injection starts at ${start}, after the last reading (${last})`,
    fix: "correct the start, or the format of the time column",
  }),
  "leave-out-reversed": entry<{ from: string; to: string }>({
    severity: "error",
    says: ({ from, to }) => `a stretch cannot end (${to}) before it begins (${from})`,
    fix: "exchange `from` and `to`",
  }),
  "leave-out-nothing": entry<{ from: string; to: string }>({
    severity: "warning",
    says: ({ from, to }) => `no reading lies between ${from} and ${to}`,
    fix: "times here are those of the readings; correct them, or take the entry out",
  }),
  "below-zero": entry<{ what: string; value: string; zero: boolean }>({
    severity: "error",
    says: ({ what, value, zero }) => `${what} is ${value}: it must be ${zero ? "0 or more" : "above 0"}`,
    fix: "correct the sign or the number",
  }),
  "rise-zero": entry<Record<never, never>>({
    severity: "error",
    says: () => "a detector that does not rise measures nothing",
    fix: "give `rise` by how much the reading rises at the concentration `per`",
  }),
  "reading-unit": entry<{ what: string; unit: string; reading: string }>({
    severity: "error",
    says: ({ what, unit, reading }) => `${what} is in ${unit}, the readings are in ${reading}`,
    fix: "use the same kind of unit for both",
  }),
  "amount-mismatch": entry<{ at: string; amount: string; reading: string; wanted: string }>({
    severity: "error",
    says: ({ at, amount, reading, wanted }) =>
      `an injection in ${amount} makes a concentration in ${wanted}; the reading at '${at}' is in ${reading}`,
    fix: "give the reading a calibration to that unit, or `scale: free` where only the shape is trusted",
  }),
  "inlet-baseline": entry<{ before: number }>({
    severity: "error",
    says: ({ before }) =>
      `the baseline of a measured inlet is taken from the points before \`start\`: there ${before === 1 ? "is 1" : `are ${before}`}, and it takes 3`,
    fix: "give the injection its `start`, with the table beginning before it; or take a blank off by `calibration`",
  }),
} as const;
