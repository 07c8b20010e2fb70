import type { Span } from "../text/source.js";
import type { Unit } from "../units/unit.js";

/**
 * Stirred cells and the flows between them, from tables: columns, no object per cell. SI.
 * Every cell is in balance to round-off: what a table lacks of it was reconciled, or refused.
 */
export interface ZoneTable {
  /** m3 by cell. */
  readonly volume: Float64Array;
  /** Where the flow of a row comes from: a cell by its number, or inlet k as -1 - k. */
  readonly from: Int32Array;
  /** Where it goes: a cell by its number, or outlet k as -1 - k. */
  readonly to: Int32Array;
  /** m3/s by row. */
  readonly flow: Float64Array;
  readonly inlets: readonly Terminal[];
  readonly outlets: readonly Terminal[];
  /** Is the table scaled to what enters, or is what enters to be what the table says? */
  readonly follow: boolean;
  /** How far flows may be from balance, relative. */
  readonly tolerance: number;
  readonly names: ZoneNames;
  /** Where the document names the two tables. */
  readonly at?: { readonly volumes: Span; readonly flows: Span };
  /** The units that the tables use, for printing. */
  readonly units: readonly { readonly unit: Unit }[];
}

/** The cells' own names, as the table has them. */
export interface ZoneNames {
  nameOf(cell: number): string;
  /** -1 where there is none of that name. */
  numberOf(name: string): number;
}

/** A name in the flow table that is no cell: where streams enter or leave. */
export interface Terminal {
  readonly name: string;
  /** m3/s: what the table says of it. */
  readonly flow: number;
  /** Where the table names it first. */
  readonly at: Span;
}

/** All that enters, m3/s. */
export const tableInflow = (zones: ZoneTable): number => zones.inlets.reduce((sum, t) => sum + t.flow, 0);
