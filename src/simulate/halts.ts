import type { Halt } from "../numerics/odex.js";
import { formatNumber } from "../units/format.js";

const inWords: Readonly<Record<Halt, string>> = {
  "step-too-small": "it changes too fast for any step that can be told from none",
  "too-many-steps": "too many steps for the time asked; a shorter time or another engine may do",
  "not-finite": "its tracer is no longer a finite number",
};

/** When, where and why an integration ended early. */
export const haltSaid = (t: number, why: Halt, node: string): string =>
  `the integrator stopped ${formatNumber(t)} s after the start${node === "" ? "" : `, in ${node}`}: ${inWords[why]}`;

/** What is missing of a curve whose passes through tubes were too many to be followed one by one. */
export const cut = (complete: number, last: number): string | undefined =>
  last < complete
    ? undefined
    : `tracer passes tubes in circles too often to be followed one by one: all is there up to ${formatNumber(complete)} s, later some is missing`;
