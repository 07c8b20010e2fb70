import type { DimensionName } from "../../units/dimension.js";
import type { KeyShape, RecordShape, Shape } from "../shape.js";

/** Short makers, so that a declaration of a document reads like the document. */
export const text: Shape = { is: "text" };
export const name: Shape = { is: "name" };
export const quantity = (...dimension: DimensionName[]): Shape => ({
  is: "quantity",
  dimension: dimension.length === 0 ? "any" : dimension.length === 1 ? dimension[0] : dimension,
});
export const choice = (...of: string[]): Shape => ({ is: "choice", of });
export const whole = (atLeast: number): Shape => ({ is: "whole", atLeast });
export const list = (of: Shape, length?: number): Shape => ({
  is: "list",
  of,
  ...(length === undefined ? {} : { length }),
});
export const named = (each: Shape, keys: "names" | "dotted" | "free" = "names"): Shape => ({ is: "named", each, keys });
export const record = (keys: Record<string, KeyShape>, oneOf?: readonly string[]): RecordShape => ({
  is: "record",
  keys,
  ...(oneOf ? { oneOf } : {}),
});
export const either = (...of: Shape[]): Shape => ({ is: "either", of });
/** One of these, or a list of them. */
export const oneOrMore = (of: Shape): Shape => either(...(of.is === "either" ? of.of : [of]), list(of));

/** A key that the language has and this version refuses. */
export const later = (says: string): KeyShape => ({ shape: text, says, later: true });

/** The keys that begin and accompany every document. */
export const heading = (kind: string, title: string, example: string): Record<string, KeyShape> => ({
  [kind]: { shape: text, says: title, required: true, example },
  format: {
    shape: choice("1"),
    says: "The version of the language that the file is written in. This version reads format 1.",
    required: true,
    example: "1",
  },
  notes: {
    shape: text,
    says: "Anything a reader should know: where the facts come from, what was assumed. It changes no result.",
  },
});

/** `time: {column: t, unit: min}`: a column of a table, by header or by position from 1. */
export const column = (what: string, extra: Record<string, KeyShape> = {}): Shape =>
  record({
    column: {
      shape: text,
      says: `The column that holds ${what}: its header as it stands in the file, or its position from 1.`,
      required: true,
      example: "Time",
    },
    unit: {
      shape: text,
      says: "The unit of the numbers in that column. Clock times have a `format` instead.",
      example: "min",
    },
    ...extra,
  });

export const csv: KeyShape = {
  says: "How the table is written, where backmix should not find out by itself. Semicolons, decimal commas, a byte-order mark and a row of units under the headers are understood without it.",
  example: '{decimal: comma, separator: ";", header: 3}',
  shape: record({
    decimal: {
      shape: choice("point", "comma"),
      says: "What stands before the decimals: `1.5` or `1,5`.",
      example: "comma",
    },
    separator: {
      shape: text,
      says: "What stands between columns: `,`, `;`, `tab` or any one character.",
      example: '";"',
    },
    header: {
      shape: whole(0),
      says: "The line of the file that holds the headers, counted from 1; 0 where there is none and columns go by position.",
    },
    missing: {
      shape: oneOrMore(text),
      says: "Words that stand where a value is missing, besides an empty field, NaN, n/a and the like. Any other word is an error with its row, never a silent zero.",
      example: "[Bad, Off scan]",
    },
  }),
};
