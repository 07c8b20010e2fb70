import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { collector } from "../../src/problems/report.js";
import { textOf } from "../../src/read/cells.js";
import { type CsvOptions, readCsv } from "../../src/read/csv.js";
import { dataRows } from "../../src/read/table.js";
import { openWideCsv } from "../../src/read/wide-csv.js";
import { placeOf } from "../../src/text/source.js";
import { dimensions } from "../../src/units/dimension.js";

const at = { source: { path: "x.yaml", text: "" }, from: 0, to: 0 };
const litre = { name: "L", factor: 1e-3, offset: 0, dimension: dimensions.volume };
const asked = (...columns: (string | number)[]) =>
  columns.map((column) => ({ column, at, unit: column === "v" ? litre : undefined }));

/** Cells of the columns asked for, row by row; the problems' codes where it cannot be opened. */
function cells(
  content: string | Uint8Array,
  columns: (string | number)[],
  options: CsvOptions = {},
): string[][] | string[] {
  const { report, problems } = collector();
  const table = openWideCsv("t.csv", content, asked(...columns), options, report, () => content);
  if (!table) return problems.map((p) => p.code);
  const rows: string[][] = [];
  table.each((b) => rows.push(columns.map((_, i) => textOf(table.bytes, b[2 * i], b[2 * i + 1]))));
  return rows;
}

describe("cells of the columns asked for", () => {
  const rows = [
    ["a", "1.5"],
    ["b", "2"],
  ];
  test.each([
    ["plain", "id,v\na,1.5\nb,2\n"],
    ["Windows line ends, none at the end", "id,v\r\na,1.5\r\nb,2"],
    ["old Macintosh line ends", "id,v\ra,1.5\rb,2\r"],
    ["byte-order mark", "\uFEFFid,v\na,1.5\nb,2\n"],
    ["blank lines, comments, empty rows", "# made today\nid,v\n\na,1.5\n# half way\n ,\n  b , 2 \n\n"],
    ["quotation marks", '"id","v"\n"a","1.5"\n"b",2\n'],
    ["tabs", "id\tv\na\t1.5\nb\t2\n"],
    ["a row of units", "id,v\n,L\na,1.5\nb,2\n"],
    ["columns between", "x,id,y,v,z\n1,a,2,1.5,3\n1,b,2,2,3\n"],
  ])("%s", (_, text) => {
    expect(cells(text, ["id", "v"])).toEqual(rows);
    expect(cells(new TextEncoder().encode(text), ["id", "v"])).toEqual(rows);
  });

  test("by position, without a header", () => expect(cells("a,1.5\nb,2\n", [1, 2])).toEqual(rows));
  test("a column for two roles", () => expect(cells("id,v\na,1.5\n", ["v", "id", "v"])).toEqual([["1.5", "a", "1.5"]]));
  test("a row that is too short has an empty cell", () =>
    expect(cells("id,v\na\nb,2\n", ["id", "v"])).toEqual([
      ["a", ""],
      ["b", "2"],
    ]));
  test("a first row without its number is no row of units", () =>
    expect(cells("id,v\na,ten\nb,2\n", ["id", "v"])).toEqual([
      ["a", "ten"],
      ["b", "2"],
    ]));
  test("a separator and line break in quotation marks", () =>
    expect(cells('id,v\n"a,\n b",1.5\nb,2\n', ["id", "v"])).toEqual([
      ["a,\n b", "1.5"],
      ["b", "2"],
    ]));
  test("Windows-1252 and UTF-16 as instruments write them", () => {
    expect(
      cells(Uint8Array.from([..."id,v\n"].map((c) => c.charCodeAt(0)).concat(0xb5, 44, 49, 10)), ["id", "v"]),
    ).toEqual([["µ", "1"]]);
    const wide = new Uint8Array(new Uint16Array([..."\uFEFFid,v\nµ,1\n"].map((c) => c.charCodeAt(0))).buffer);
    expect(cells(wide, ["id", "v"])).toEqual([["µ", "1"]]);
  });
});

test("the fast reader and the other agree on any table", () => {
  const cell = fc.string({ unit: fc.constantFrom(..."ab1. -\t;'é"), maxLength: 5 });
  const table = fc.array(fc.tuple(cell, cell, cell), { maxLength: 30 });
  const usual = (text: string): string[][] | string[] => {
    const { report, problems } = collector();
    const whole = readCsv({ path: "t.csv", text }, {}, report);
    const data = whole && dataRows(whole, asked("id", "w"), {}, report);
    if (!data) return problems.map((p) => p.code);
    if (data.rows.length === 0) return ["csv-empty"];
    return data.rows
      .filter(({ cells }) => cells.some((c) => c !== ""))
      .map(({ cells }) => data.columns.map((c) => cells[c] ?? ""));
  };
  fc.assert(
    fc.property(table, fc.constantFrom("\n", "\r\n"), fc.boolean(), (rows, end, quoted) => {
      const write = (c: string): string => (quoted ? `"${c}"` : c);
      const text = ["id,v,w", "0,0,0", ...rows.map((r) => r.map(write).join(","))].join(end);
      expect(cells(text, ["id", "w"])).toEqual(usual(text));
    }),
    { numRuns: 500 },
  );
});

test("a column that is not there, an empty table, one without rows", () => {
  expect(cells("id,v\na,1\n", ["id", "volume"])).toEqual(["column-missing"]);
  expect(cells("", ["id"])).toEqual(["csv-empty"]);
  expect(cells("id,v\n", ["id", "v"])).toEqual(["csv-empty"]);
});

test("a cell's place is its line and column, also behind letters of several bytes", () => {
  const { report } = collector();
  const text = "id,v\näöü,1\nß,oops\n";
  const table = openWideCsv("t.csv", text, asked("id", "v"), {}, report, () => text);
  const places: number[][] = [];
  table?.each((b) => {
    const { line, column, endColumn } = placeOf(table.span(b[2], b[3]));
    places.push([line, column, endColumn]);
  });
  expect(places).toEqual([
    [2, 5, 6],
    [3, 3, 7],
  ]);
});
