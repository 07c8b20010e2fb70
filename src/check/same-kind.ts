import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { describeDimension, exampleFor, nameDimension } from "../units/describe.js";
import { type Dimension, sameDimension } from "../units/dimension.js";

/** A value that stands in for another must be of its dimension. */
export function sameKind(wanted: Dimension, { dimension, at, unknown }: Value, report: Report): void {
  if (unknown || sameDimension(wanted, dimension)) return;
  report("wrong-dimension", at, {
    text: at.source.text.slice(at.from, at.to),
    got: nameDimension(dimension),
    wanted: describeDimension(wanted),
    example: exampleFor(wanted),
  });
}
