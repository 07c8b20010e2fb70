import type { Report } from "../problems/report.js";
import { readCsv } from "../read/csv.js";
import { decodeText } from "../read/decode.js";
import type { Files } from "../read/files.js";
import { openTable } from "../read/open.js";
import { beside } from "../read/paths.js";
import { countWrong, dataRows, decimalOf, isMissing, readNumber, type Wrong, wrongAt } from "../read/table.js";
import { child, type Tree, textOf } from "../read/tree.js";
import { fromUnit, type Unit } from "../units/unit.js";
import { column, csvOptions } from "./table-keys.js";

/** Standards of a calibration, SI; rows without one of the two are passed over. Undefined where something is wrong; reported. */
export function readStandards(
  node: Tree,
  readingUnit: Unit,
  valueUnit: Unit,
  files: Files,
  report: Report,
): { reading: number[]; value: number[] } | undefined {
  const fileNode = child(node, "file");
  const file = textOf(node, "file");
  if (!fileNode || file === undefined) return undefined;
  const path = beside(fileNode.at.source.path, file);
  const content = openTable(path, { text: file, at: fileNode.at }, files, report);
  const ofReading = column(child(node, "reading"), fileNode);
  const ofValue = column(child(node, "value"), fileNode);
  if (content === undefined || !ofReading || !ofValue) return undefined;
  const options = csvOptions(child(node, "csv"));
  const table = readCsv({ path, text: decodeText(content) }, options, report);
  const asked = [
    { ...ofReading, unit: readingUnit },
    { ...ofValue, unit: valueUnit },
  ];
  const data = table && dataRows(table, asked, options, report);
  if (!table || !data) return undefined;
  const decimal = decimalOf(table, data, options);
  const found: { reading: number[]; value: number[] } = { reading: [], value: [] };
  let wrong: Wrong | undefined;
  for (const row of data.rows) {
    const cells = data.columns.map((c) => row.cells[c] ?? "");
    if (cells.some((cell) => isMissing(cell, options))) continue;
    const numbers = cells.map((cell) => readNumber(cell, decimal));
    const [reading, value] = numbers;
    if (reading === undefined || value === undefined)
      wrong = countWrong(wrong, row, data.columns[reading === undefined ? 0 : 1]);
    else {
      found.reading.push(fromUnit(reading, readingUnit));
      found.value.push(fromUnit(value, valueUnit));
    }
  }
  if (!wrong) return found;
  const text = wrong.row.cells[wrong.column] ?? "";
  report("cell-not-number", wrongAt(table, wrong), { text, row: wrong.row.line, others: wrong.others });
  return undefined;
}
