import type { Span } from "../text/source.js";
import type { Unit } from "../units/unit.js";
import type { Value } from "./value.js";

/** One tracer test as declared. All numbers SI unless said; the raw files are not in it, only where they are. */
export interface Trial {
  readonly title: string;
  readonly at: Span;
  readonly path: string;
  /** Path of the network as written (relative to the trial), if any. */
  readonly vessel: string | undefined;
  /** Flows of the day by feed name. */
  readonly flows: ReadonlyMap<string, Value>;
  /** Constants that the day set otherwise. */
  readonly with: ReadonlyMap<string, Value>;
  readonly injections: readonly Injection[];
  readonly readings: readonly Reading[];
}

/** What went in. `start` is in seconds on the trial's clock (that of its readings), `lasting` in seconds (0: at once). */
export interface Injection {
  readonly at: string;
  readonly where: Span;
  readonly start: number;
  readonly lasting: number;
  readonly form:
    | { readonly is: "pulse"; readonly amount: Value }
    | { readonly is: "step"; readonly level: Value; readonly from: Value | undefined }
    | { readonly is: "signal"; readonly table: Series };
}

/** A probe or a set of samples: where, which file, and every cleaning step, declared. */
export interface Reading {
  readonly at: string;
  readonly where: Span;
  /** Raw points as read from the file, cleaned of nothing: seconds on the trial's clock, value in the detector's unit (SI). */
  readonly series: Series | undefined;
  readonly calibration: Calibration | undefined;
  readonly baseline: "none" | "constant" | "drift";
  readonly scale: "known" | "free";
  /** Sample line and detector: pure delay and first-order lag, s. */
  readonly line: { readonly delay: Value | undefined; readonly lag: Value | undefined };
  readonly noise: { readonly floor: Value | undefined; readonly relative: number | undefined } | undefined;
  readonly leaveOut: readonly {
    readonly from: number;
    readonly to: number;
    readonly because: string;
    readonly at: Span;
  }[];
  /** The unit of value for people, after calibration. */
  readonly unit: Unit;
}

/** Concentration = (raw - blank) / rise * per. SI. */
export interface Calibration {
  readonly blank: number;
  readonly rise: number;
  readonly per: number;
  readonly perUnit: Unit;
}

/** A column pair of a table: s and SI value, with the file's own row number for each point. */
export interface Series {
  readonly file: string;
  readonly at: Span;
  readonly time: Float64Array;
  readonly value: Float64Array;
  readonly row: Int32Array;
  readonly timeUnit: Unit;
  readonly valueUnit: Unit;
  /** Rows whose value was a declared word for missing, or empty. */
  readonly missing: number;
}
