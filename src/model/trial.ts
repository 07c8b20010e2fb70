import type { ClockFormat } from "../read/clock.js";
import type { Series } from "../read/series.js";
import type { Span } from "../text/source.js";
import type { Unit } from "../units/unit.js";
import type { Value } from "./value.js";

export type { Series } from "../read/series.js";

/** One tracer test as declared. All numbers SI unless said; the raw files are not in it, only where they are. */
export interface Trial {
  readonly title: string;
  readonly at: Span;
  readonly path: string;
  /** Path of the network that the trial names, if any; no longer relative to the trial. */
  readonly vessel: string | undefined;
  readonly vesselAt?: Span | undefined;
  /** Flows of the day by feed name. */
  readonly flows: ReadonlyMap<string, Value>;
  /** Constants that the day set otherwise. */
  readonly with: ReadonlyMap<string, Value>;
  readonly injections: readonly Injection[];
  /** Tracer that the vessel holds at the start. */
  readonly contents?: Contents | undefined;
  readonly readings: readonly Reading[];
  /** How the trial's clock is written, for printing its times; undefined where times are elapsed. */
  readonly clock?: ClockFormat | undefined;
}

/** Concentrations in the vessel when it starts, s on the trial's clock. */
export interface Contents {
  readonly at: Span;
  readonly begins: number;
  /** By compartment, part, member or cell, or `all`; what is inside another name's place has the level of its own. */
  readonly levels: readonly { readonly of: string; readonly at: Span; readonly level: Value }[];
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
    /** A measured inlet as concentration (SI) on the trial's clock: calibrated, left-out points gone, line delay taken off. */
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
