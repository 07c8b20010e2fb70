import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { collector } from "../../src/problems/report.js";
import { clockFormat } from "../../src/read/clock.js";
import { cellSpan, plainRows, quotedRows, readCsv, separatorOf } from "../../src/read/csv.js";
import { decodeText } from "../../src/read/decode.js";
import { readSeries, type SeriesSpec } from "../../src/read/series.js";
import { placeOf } from "../../src/text/source.js";
import { parseUnit } from "../../src/units/parse.js";
import type { Unit } from "../../src/units/unit.js";

const unit = (text: string): Unit => {
  const found = parseUnit(text);
  if ("fault" in found) throw new Error(text);
  return found;
};

const at = { source: { path: "trial.yaml", text: "" }, from: 0, to: 0 };

function read(text: string, change: Partial<SeriesSpec> = {}) {
  const { report, problems } = collector();
  const spec: SeriesSpec = {
    file: "log.csv",
    at,
    time: { column: "t", at, unit: unit("min") },
    format: undefined,
    value: { column: "c", at, unit: unit("g/L") },
    csv: {},
    shownTime: unit("min"),
    ...change,
  };
  const got = readSeries({ path: "log.csv", text }, spec, report);
  return {
    time: got && [...got.series.time],
    value: got && [...got.series.value],
    got,
    problems,
    codes: problems.map((p) => p.code),
  };
}

const clock = (format?: string): Partial<SeriesSpec> => ({
  time: { column: "t", at, unit: undefined },
  format: format === undefined ? undefined : clockFormat(format),
});

describe("a table as plants write it", () => {
  const plain = { time: [0, 60, 120], value: [0, 1.5, 2] };

  test.each([
    ["plain", "t,c\n0,0\n1,1.5\n2,2\n"],
    ["semicolons and decimal commas", "t;c\n0;0\n1;1,5\n2;2\n"],
    ["tabs, carriage returns, a comment, blank lines", "# made by hand\r\nt\tc\r\n\r\n0\t0\r\n1\t1,5\r\n2\t2\r\n"],
    ["old line ends", "t,c\r0,0\r1,1.5\r2,2\r"],
    ["a row of units", "t;c\nmin;[g/L]\n0;0\n1;1,5\n2;2\n"],
    ["quotes and blanks", 't , c \n"0", 0\n"1","1.5"\n2, 2 \n'],
    ["a preamble above the header", "Logger 7,serial 42,x\nplant,north,y\nt,c,d\n0,0,a\n1,1.5,b\n2,2,c\n"],
    ["missing values of the usual words", "t,c\n0,0\n0.2,\n0.4,NaN\n0.6,n/a\n0.8,Bad\n1,1.5\n2,2\n"],
    ["more columns, in another order", "tag,c,t\nA,0,0\nA,1.5,1\nA,2,2\n"],
    ["scientific notation", "t,c\n0,0e0\n1,15e-1\n2,2E+0\n"],
  ])("%s", (_, text) => {
    const { time, value, problems } = read(text);
    expect(problems).toEqual([]);
    expect(time).toEqual(plain.time);
    expect(value).toEqual(plain.value);
  });

  test("cells that do not fit the headers are told, with the row, and never read as others", () => {
    const decimalCommas = read("t,c\n0,5,1,2\n1,5,0,9\n2,5,0,4\n");
    expect(decimalCommas.codes).toEqual(["row-long"]);
    expect(decimalCommas.got).toBeUndefined();
    expect(decimalCommas.problems[0].message).toBe(
      "row 2 has 4 cells, more than the 2 columns of the table (and 2 more rows)",
    );
    expect(decimalCommas.problems[0].fix).toContain('{decimal: comma, separator: ";"}');
    // A whole number among decimals: only some rows are long.
    expect(read("t,c\n0,0\n1,1,5\n2,2\n").problems[0].message).toContain("row 3 has 3 cells");
    expect(read("t,c\n0,0\n1,1.5\n2\n3,1\n").problems[0].message).toBe(
      "row 4 ends after 1 cell: column 'c' is cut off",
    );
    expect(read("c,t,tag\n0,0\n1.5,1\n2,2,b\n").codes).toEqual([]);
    expect(read("t,c\n0,0,\n1,1.5,,\n2,2\n\n,,,\n").codes).toEqual([]);
    const quoted = read('t,c\n"0,5","1,2"\n"1,5","0,9"\n2,"0,4"\n', { csv: { decimal: "comma" } });
    expect(quoted.value).toEqual([1.2, 0.9, 0.4]);
  });

  test("columns by position, with and without a header", () => {
    const byPosition: Partial<SeriesSpec> = {
      time: { column: 2, at, unit: unit("min") },
      value: { column: 1, at, unit: unit("g/L") },
    };
    for (const text of ["0,0\n1.5,1\n2,2\n", "Cond,Time\n0,0\n1.5,1\n2,2\n", "Cond,Time\ng/L,min\n0,0\n1.5,1\n2,2\n"]) {
      expect(read(text, byPosition)).toMatchObject({ ...plain, problems: [] });
    }
  });

  test("what the document declares comes first: header line, separator, decimal, words", () => {
    const text = "t,c\nold,old\nt|c\n0|0\n1|1,5\n1,5|off scan\n2|2\n";
    const csv = { header: 3, separator: "|", decimal: "comma" as const, missing: ["Off scan"] };
    expect(read(text, { csv })).toMatchObject({ ...plain, problems: [] });
    expect(read(text, { csv }).got?.series.missing).toBe(1);
  });

  test("bytes: marks, UTF-16, and old Windows pages", () => {
    const utf16 = (text: string) => new Uint8Array([0xff, 0xfe, ...Buffer.from(text, "utf16le")]);
    expect(decodeText(new Uint8Array([0xef, 0xbb, 0xbf, 0x74]))).toBe("t");
    expect(decodeText("\uFEFFt")).toBe("t");
    expect(decodeText(utf16("t,µS"))).toBe("t,µS");
    expect(decodeText(new Uint8Array([0xb5, 0x53]))).toBe("µS");
  });

  test("a row keeps the line that an editor shows", () => {
    const { got } = read('# note\nt,c,d\n\n0,0,"two\nlines"\n1,1.5,x\n2,2,y\n');
    expect([...(got?.series.row ?? [])]).toEqual([5, 6, 7]);
  });

  test("round trip: what is written is read, whatever the dialect", () => {
    const dialect = fc.constantFrom<[string, string]>([",", "."], [";", ","], [";", "."], ["\t", ","], ["|", "."]);
    const points = fc.array(fc.double({ min: -1e6, max: 1e6, noNaN: true }), { minLength: 3, maxLength: 40 });
    fc.assert(
      fc.property(dialect, points, ([separator, point], values) => {
        const written = values.map((v, i) => `${i}${separator}${String(v).replace(".", point)}`);
        const { value, problems } = read(`t${separator}c\n${written.join("\n")}`);
        expect(problems).toEqual([]);
        expect(value).toEqual(values.map((v) => v + 0));
      }),
    );
  });
});

describe("clock times", () => {
  const times = (rows: string[]) => `t,c\n${rows.map((r) => `${r},1`).join("\n")}`;

  test.each([
    ["h:m:s", ["09:14:20", "09:14:21.5", "9:15:00"], [33260, 33261.5, 33300]],
    ["h:m", ["9:14", "10:00", "27:30"], [33240, 36000, 99000]],
    ["m:s", ["0:30", "2:00", "75:10"], [30, 120, 4510]],
    ["h:m:s am", ["11:59:00 AM", "12:00:00 PM", "1:00:00 pm"], [43140, 43200, 46800]],
    ["h:m am", ["12:05am", "1:00 a.m.", "1:00pm"], [300, 3600, 46800]],
  ])("%s", (format, rows, want) => {
    const { time, problems } = read(times(rows), clock(format));
    expect(problems).toEqual([]);
    expect(time).toEqual(want);
  });

  test("midnight wraps, twice if need be", () => {
    const { time } = read(times(["23:50:00", "00:10:00", "12:00:00", "23:59:00", "00:01:00"]), clock("h:m:s"));
    expect(time).toEqual([85800, 87000, 129600, 172740, 172860]);
  });

  test("dates: day first, month first, names, zones, all the same instant", () => {
    const want = Date.UTC(2024, 2, 5, 9, 14, 20) / 1000;
    for (const [format, text] of [
      ["d/M/y h:m:s", "05/03/2024 09:14:20"],
      ["d/m/y h:m:s", "5/3/24 9:14:20"],
      ["M/d/yyyy hh:mm:ss am", "3/5/2024 9:14:20 AM"],
      ["dd-MMM-yyyy HH:mm:ss", "05-Mar-2024 09:14:20"],
      ["y-M-dTh:m:sZ", "2024-03-05T11:14:20+02:00"],
    ]) {
      expect(clockFormat(format)?.read(text), format).toBe(want);
    }
    expect(clockFormat("d.M.y")?.read("31.06.2024")).toBeUndefined();
  });

  test("what gives itself away needs no format; what does not is asked for", () => {
    expect(
      read(times(["2024-03-05T09:14:20", "2024-03-05T09:14:30", "2024-03-06T00:00:00"]), clock()).problems,
    ).toEqual([]);
    expect(read(times(["09:14:20", "09:14:21", "09:14:22"]), clock()).codes).toEqual([]);
    expect(read(times(["03/05/2024 9:14", "03/05/2024 9:15", "03/05/2024 9:16"]), clock()).codes).toEqual([
      "date-ambiguous",
    ]);
    expect(read(times(["0", "1", "2"]), clock()).codes).toEqual(["unit-missing"]);
  });

  test("nonsense is no format", () => {
    for (const text of ["", "x", "h:h", "d.M", "am", "hello"]) expect(clockFormat(text), text).toBeUndefined();
  });
});

describe("faults have the line of the file, and nothing is read as zero", () => {
  test.each([
    ["csv-empty", ""],
    ["csv-empty", "\n# only a note\n"],
    ["csv-not-text", "PK\u0003\u0004\0\0"],
    ["csv-quote", 't,c\n0,"0\n1,1\n2,2\n'],
    ["column-missing", "t,cond\n0,0\n1,1\n2,2\n"],
    ["column-twice", "t,c,c\n0,0,0\n1,1,1\n2,2,2\n"],
    ["cell-not-number", "t,c\n0,0\n1,oops\n2,2\n3,3\n"],
    ["cell-not-number", 't,c\n0,0\n1,"1,5"\n2,2\n3,3\n'],
    ["cell-not-number", "t;c\n0;0\n1;1.234,5\n2;2\n3;3\n"],
    ["cell-not-number", "t,c\n0,0\n1,<0.01\n2,2\n3,3\n"],
    ["cell-not-time", "t,c\n0,0\nnoon,1\n2,2\n3,3\n"],
    ["time-back", "t,c\n0,0\n2,1\n1,2\n3,3\n"],
    ["points-few", "t,c\n0,0\n1,1\n"],
    ["points-few", "t,c\n0,\n1,n/a\n2,NaN\n3,Bad\n"],
  ])("%s", (code, text) => {
    const { got, codes } = read(text);
    expect(codes).toEqual([code]);
    expect(got).toBeUndefined();
  });

  test("the caret stands under the cell, and others are counted, not repeated", () => {
    const { problems } = read("t;c;d\n0;0;1\n1; oops;1\n2;2;1\n3;bad luck;1\n4;?;1\n");
    expect(problems).toHaveLength(1);
    expect(problems[0].message).toBe("row 3: 'oops' is no number (and 2 more rows)");
    expect(placeOf(problems[0].at)).toEqual({ line: 3, column: 4, endLine: 3, endColumn: 8 });
  });

  test("a repeated time is told, and kept", () => {
    const { codes, time } = read("t,c\n0,0\n1,1\n1,2\n2,3\n");
    expect(codes).toEqual(["time-twice"]);
    expect(time).toEqual([0, 60, 60, 120]);
  });

  test("a unit in the file that is not the declared one is told", () => {
    const named = { value: { column: "c [mg/L]", at, unit: unit("g/L") } };
    expect(read("t,c [mg/L]\n0,0\n1,1\n2,2\n", named).codes).toEqual(["column-unit"]);
    expect(read("t,c\nh,g/L\n0,0\n1,1\n2,2\n").codes).toEqual(["column-unit"]);
    expect(read("t,c\nmin,g/l\n0,0\n1,1\n2,2\n").codes).toEqual([]);
  });
});

test("a separator inside quotes cuts nothing", () => {
  expect(separatorOf('a,"b;c;d"\n1,2\n3,4')).toBe(",");
  const { report } = collector();
  const source = { path: "x.csv", text: 'a,b\n"1,5",2\n' };
  const table = readCsv(source, {}, report);
  expect(table?.rows[1].cells).toEqual(["1,5", "2"]);
  if (table) expect(placeOf(cellSpan(table, table.rows[1], 1))).toMatchObject({ line: 2, column: 7 });
});

test("the quick way and the general way cut a table without quotation marks alike", () => {
  const text = fc.array(fc.constantFrom("a", "1,5", " ", "#", ";", "\t", "\n", "\r\n", "\r", "-2.5"), {
    maxLength: 60,
  });
  fc.assert(
    fc.property(text, fc.constantFrom(";", ",", "\t"), (pieces, separator) => {
      const source = { path: "x.csv", text: pieces.join("") };
      const filled = (rows: ReturnType<typeof plainRows> | undefined) =>
        rows?.filter((r) => r.cells.some((c) => c !== ""));
      const { report } = collector();
      expect(filled(plainRows(source.text, separator))).toEqual(filled(quotedRows(source, separator, report)));
    }),
  );
});
