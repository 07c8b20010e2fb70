import { readFileSync } from "node:fs";

/** The columns of a table of numbers with a header. */
export function columnsOf(path: string): Float64Array[] {
  const [header, ...lines] = readFileSync(path, "utf8").trim().split("\n");
  const columns = header.split(",").map(() => new Float64Array(lines.length));
  lines.forEach((line, i) => {
    line.split(",").forEach((cell, j) => {
      columns[j][i] = Number(cell);
    });
  });
  return columns;
}

/** Largest difference of each column but the first, as a fraction of the reference's largest value there; the worst of them. */
export function curveError(path: string, reference: string): number {
  const [, ...found] = columnsOf(path);
  const [, ...known] = columnsOf(reference);
  return Math.max(
    ...known.map((column, j) => {
      let [off, peak] = [0, 0];
      column.forEach((v, i) => {
        off = Math.max(off, Number.isNaN(found[j][i]) ? Number.POSITIVE_INFINITY : Math.abs(found[j][i] - v));
        peak = Math.max(peak, Math.abs(v));
      });
      return off / peak;
    }),
  );
}
