import type { Unit } from "../units/unit.js";
import type { Band } from "./band.js";
import type { ExpectedParameter } from "./expected.js";
import type { Truncated } from "./passage.js";

/** What could spoil the test as it is drafted, and the way out. */
export interface Alarm {
  readonly code: string;
  readonly message: string;
  readonly next: string;
}

/** One probe or sampling point of a planned test. SI; times since the injection. */
export interface PlannedReading {
  readonly at: string;
  readonly unit: Unit;
  readonly isPulse: boolean;
  readonly limits: { readonly below: number | undefined; readonly above: number | undefined };
  readonly times: Float64Array;
  readonly expected: Float64Array;
  readonly sd: Float64Array;
  readonly band: Band | undefined;
  readonly peak: number;
  readonly end: number;
  readonly noise: { readonly floor: number; readonly assumed: boolean };
  readonly t10: { readonly value: number; readonly sd: number; readonly spacing: number } | undefined;
  /** Sampling times that would tell all parameters best, and what share of their information per unknown the plan's give. */
  readonly best: { readonly times: Float64Array; readonly efficiency: number } | undefined;
}

export interface Plan {
  readonly dose: { readonly value: number; readonly unit: Unit; readonly is: "pulse" | "step" } | undefined;
  /** Amount that brings the peak to 100 times the noise and the last sample to 3 times; undefined where noise is not declared. */
  readonly recommended: { readonly value: number; readonly because: string } | undefined;
  readonly stop: number;
  /** The longest that a vessel within the bounds of its parameters would need, 90 % of them. */
  readonly stopWithin: number | undefined;
  readonly meanTime: number | undefined;
  readonly readings: readonly PlannedReading[];
  readonly parameters: readonly ExpectedParameter[];
  /** The same with the recommended amount. */
  readonly withRecommended: readonly ExpectedParameter[] | undefined;
  readonly truncation: readonly Truncated[];
  readonly alarms: readonly Alarm[];
  readonly cautions: readonly string[];
}
