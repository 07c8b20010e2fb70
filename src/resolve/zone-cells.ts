import type { Report } from "../problems/report.js";
import { CellNames, textOf } from "../read/cells.js";
import type { WideCsv } from "../read/wide-csv.js";
import type { Span } from "../text/source.js";

/** The first row that is wrong in one way, and how many more are. */
class Fault {
  private from = -1;
  private to = -1;
  others = 0;

  note(from: number, to: number): void {
    if (this.from >= 0) this.others++;
    else [this.from, this.to] = [from, to];
  }

  /** Tells the fault where there was one; true where there was none. */
  clear(table: WideCsv, tell: (text: string, at: Span) => void): boolean {
    if (this.from >= 0) tell(textOf(table.bytes, this.from, this.to), table.span(this.from, this.to));
    return this.from < 0;
  }
}

/** Cells of a zoned body: their names, and their volumes in SI. */
export interface Cells {
  readonly table: WideCsv;
  readonly names: CellNames;
  readonly volume: Float64Array;
}

/**
 * Reads cells from a table opened with the columns id and volume.
 * @param factor to m3
 */
export function readCells(table: WideCsv, factor: number, report: Report): Cells | undefined {
  const { bytes } = table;
  const names = new CellNames(bytes, table.mostRows);
  const volumes = new Float64Array(table.mostRows);
  const [gap, notNumber, negative, twice] = [new Fault(), new Fault(), new Fault(), new Fault()];
  let earlier = -1;
  table.each((b) => {
    // Taken by index: to take an array apart costs more than all the rest.
    const idFrom = b[0];
    const idTo = b[1];
    const from = b[2];
    const to = b[3];
    if (idFrom === idTo) return gap.note(idFrom || from, idTo || to);
    const cell = names.add(idFrom, idTo);
    if (cell < 0) {
      if (earlier < 0) earlier = -1 - cell;
      return twice.note(idFrom, idTo);
    }
    const volume = table.number(from, to);
    if (!Number.isFinite(volume)) return from < to ? notNumber.note(from, to) : gap.note(idFrom, idTo);
    if (volume < 0) negative.note(from, to);
    volumes[cell] = volume * factor;
  });
  const faultless = [
    gap.clear(table, (_, at) => report("zone-incomplete", at, { others: gap.others })),
    notNumber.clear(table, tellNotNumber(notNumber, report)),
    negative.clear(table, (value, at) =>
      report("zone-negative", at, { what: "volume", value, others: negative.others }),
    ),
    twice.clear(table, (name, at) => {
      const also = { at: table.span(...names.boundsOf(earlier)), says: "it stands here first" };
      report("zone-twice", at, { name, others: twice.others }, also);
    }),
  ].every(Boolean);
  return faultless ? { table, names, volume: volumes.subarray(0, names.count) } : undefined;
}

/** The rows of a flow table. An end is a cell's number, or -1 - k for the k-th terminal of its side. */
export interface FlowRows {
  readonly table: WideCsv;
  readonly from: Int32Array;
  readonly to: Int32Array;
  /** m3/s */
  readonly flow: Float64Array;
  /** Byte at which the row's `from` stands. */
  readonly at: Int32Array;
  readonly inlets: CellNames;
  readonly outlets: CellNames;
}

/** A table has only a few terminals; where there are more, its names are not those of the cells. */
const mostTerminals = 1000;

/**
 * Reads flows from a table opened with the columns from, to and flow. Rows of zero flow say nothing and are left out.
 * @param factor to m3/s
 */
export function readFlows(table: WideCsv, { names }: Cells, factor: number, report: Report): FlowRows | undefined {
  const { bytes } = table;
  const most = table.mostRows;
  const rows = {
    from: new Int32Array(most),
    to: new Int32Array(most),
    flow: new Float64Array(most),
    at: new Int32Array(most),
  };
  const inlets = new CellNames(bytes);
  const outlets = new CellNames(bytes);
  const [gap, notNumber, negative, itself, strange] = [0, 1, 2, 3, 4].map(() => new Fault());
  let n = 0;
  const end = (from: number, to: number, terminals: CellNames): number => {
    const cell = names.find(bytes, from, to);
    if (cell >= 0) return cell;
    const terminal = terminals.add(from, to);
    if (terminal >= mostTerminals) strange.note(from, to);
    return terminal >= 0 ? -1 - terminal : terminal;
  };
  table.each((b) => {
    const fromFrom = b[0];
    const fromTo = b[1];
    const toFrom = b[2];
    const toTo = b[3];
    const flowFrom = b[4];
    const flowTo = b[5];
    if (fromFrom === fromTo || toFrom === toTo) return gap.note(fromFrom || toFrom, fromTo || toTo);
    const flow = table.number(flowFrom, flowTo);
    if (!Number.isFinite(flow))
      return flowFrom < flowTo ? notNumber.note(flowFrom, flowTo) : gap.note(fromFrom, fromTo);
    if (flow < 0) return negative.note(flowFrom, flowTo);
    rows.from[n] = end(fromFrom, fromTo, inlets);
    rows.to[n] = end(toFrom, toTo, outlets);
    rows.flow[n] = flow * factor;
    rows.at[n] = fromFrom;
    if (rows.from[n] >= 0 && rows.from[n] === rows.to[n]) itself.note(toFrom, toTo);
    else if (flow > 0) n++;
  });
  const faultless = [
    gap.clear(table, (_, at) => report("zone-incomplete", at, { others: gap.others })),
    notNumber.clear(table, tellNotNumber(notNumber, report)),
    negative.clear(table, (value, at) => report("zone-negative", at, { what: "flow", value, others: negative.others })),
    itself.clear(table, (name, at) => report("zone-to-itself", at, { name, others: itself.others })),
    strange.clear(table, (name, at) => report("zone-names", at, { name, cell: names.nameOf(0), most: mostTerminals })),
  ].every(Boolean);
  if (!faultless) return undefined;
  const of = <A extends Int32Array | Float64Array>(a: A): A => a.subarray(0, n) as A;
  return { table, from: of(rows.from), to: of(rows.to), flow: of(rows.flow), at: of(rows.at), inlets, outlets };
}

const tellNotNumber = (fault: Fault, report: Report) => (text: string, at: Span) =>
  report("zone-not-number", at, { text, others: fault.others });
