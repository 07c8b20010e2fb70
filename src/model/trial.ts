import type { ClockFormat } from "../read/clock.js";
import type { Series } from "../read/series.js";
import type { ScalarNode } from "../read/tree.js";
import type { Span } from "../text/source.js";
import type { Dimension } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";
import type { Chemistry } from "./chemistry.js";
import type { DutyFeed } from "./duty.js";
import type { Network } from "./network.js";
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
  /** Flows that varied, m3/s on the trial's clock, by feed; `flows` then holds their means. */
  readonly flowLogs?: ReadonlyMap<string, Series>;
  /** Constants that the day set otherwise. */
  readonly with: ReadonlyMap<string, Value>;
  /** Those that are made of names of the network: values once it is known which. */
  readonly late?: ReadonlyMap<string, ScalarNode>;
  /** What else was so on the day, in words, by name; only compared. */
  readonly conditions?: ReadonlyMap<string, string>;
  readonly injections: readonly Injection[];
  /** Tracer that the vessel holds at the start. */
  readonly contents?: Contents | undefined;
  readonly readings: readonly Reading[];
  readonly tracer?: Tracer | undefined;
  /** What reacts, where it is no tracer that is followed: then there are no injections. */
  readonly reacting?: Reacting | undefined;
  /** Where it is another with declared facts moved: that one, and by how much, SI, by `factKey`. */
  readonly moved?: { readonly of: Trial; readonly by: ReadonlyMap<string, number> };
  /** How the trial's clock is written, for printing its times; undefined where times are elapsed. */
  readonly clock?: ClockFormat | undefined;
}

/** What a trial declares with a number that a fit may move: a value of the day by its name, a dose or a line by its index. */
export const factKey = {
  day: (name: string): string => `day ${name}`,
  dose: (injection: number): string => `dose ${injection}`,
  line: (reading: number, part: "delay" | "lag"): string => `line ${reading} ${part}`,
} as const;

/** A trial of a reaction: what is known of the day. Concentrations as the rate laws count them, SI. */
export interface Reacting {
  readonly chemistry: Chemistry;
  readonly at: Span;
  /** K, everywhere. */
  readonly temperature: Value | undefined;
  /** What each feed brings, by feed and species. */
  readonly feeds: ReadonlyMap<string, DutyFeed>;
  /** What the vessel holds when its clock begins, by place and species. */
  readonly contents: ReadonlyMap<string, DutyFeed>;
  /** s on the trial's clock. */
  readonly begins: number;
  /** The dimension in which each species is counted. */
  readonly concentrations: readonly Dimension[];
  /** A closed vessel of its own, a flask: the trial is of that, whatever vessel else is fitted. */
  readonly vessel: Network | undefined;
  /** Constants of the chemistry moved within their `±`, in standard deviations by name. */
  readonly shifted?: ReadonlyMap<string, number>;
}

/** The species that a reading is of. */
export interface ReadSpecies {
  readonly name: string;
  /** Its index in the chemistry. */
  readonly species: number;
  /** From the unit of the rate laws to that of the reading, SI: a molar mass where one is an amount and the other a mass. */
  readonly factor: number;
  /** An analysis of the steady state: its one point has no time. */
  readonly steady: boolean;
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
    | {
        readonly is: "signal";
        readonly table: Series;
        /** Time constant of the first-order detector that saw it, s; still in the table. */
        readonly lag?: number;
      };
}

/** What the tracer does that the liquid does not. */
export interface Tracer {
  /** The substance of the network that it divides with where streams part; undefined where it divides as the liquid does. */
  readonly follows?: { readonly of: string; readonly at: Span };
  /** Radioactive decay, 1/s: amounts are those at the start of their injection. */
  readonly decay?: number;
  /** Loss of first order in the vessel, 1/s. */
  readonly loss?: number;
  readonly retained?: readonly Retained[];
}

/** A body that holds the tracer back: it sees `factor` times the volume. A name is one of the network's. */
export interface Retained {
  readonly body: string;
  readonly at: Span;
  readonly factor: number | { readonly name: string; readonly at: Span };
}

/** A probe or a set of samples: where, which file, and every cleaning step, declared. */
export interface Reading {
  /** The place, for people: of a mix, its places with their shares. */
  readonly at: string;
  readonly where: Span;
  /** The places that it draws from; shares add to 1. */
  readonly places: readonly Place[];
  /** Raw points as read from the file, cleaned of nothing: seconds on the trial's clock, value in the detector's unit (SI). */
  readonly series: Series | undefined;
  /** What the detector's own corrections make of those values, one after another; the last is a concentration. */
  readonly stages: readonly Stage[];
  /** Change of every point's concentration for one standard deviation of each thing that a calibration leaves open. SI. */
  readonly doubts: readonly Float64Array[];
  /** Per point: -1 at or below the lower limit, 1 at or above the upper one, 0 between. Undefined where there are no limits. */
  readonly censored: Int8Array | undefined;
  /** Concentrations, SI, beyond which a reading is not believed. */
  readonly limits: { readonly below: number | undefined; readonly above: number | undefined };
  readonly calibration: Calibration | undefined;
  readonly baseline: "none" | "constant" | "drift";
  readonly scale: "known" | "free";
  /** Sample line and detector: pure delay and first-order lag, s. */
  readonly line: { readonly delay: Value | undefined; readonly lag: Value | undefined };
  readonly noise:
    | {
        readonly floor: Value | undefined;
        readonly relative: number | undefined;
        readonly counting?: Counting | undefined;
      }
    | undefined;
  /** Whether neighbouring errors hang together: as exp(-gap / time), s; `fitted`: so, with a time from the data; undefined: not said. */
  readonly correlated?: Correlated | undefined;
  readonly leaveOut: readonly {
    readonly from: number;
    readonly to: number;
    readonly because: string;
    readonly at: Span;
  }[];
  /** The unit of value for people, after calibration. */
  readonly unit: Unit;
  /** In a trial of a reaction. */
  readonly of?: ReadSpecies;
}

export type Correlated = "no" | "fitted" | { readonly time: number };

/** A place that a reading draws from. */
export interface Place {
  readonly name: string;
  readonly where: Span;
  readonly share: number;
}

/** The values of a series after one correction, SI. */
export interface Stage {
  readonly name: "dead time" | "temperature" | "calibration";
  readonly unit: Unit;
  readonly value: Float64Array;
}

/** Counts: how long each reading counted, and for how long a count makes the detector blind, s. */
export interface Counting {
  readonly over: number;
  readonly deadTime: number;
}

/** From what the detector reads to a concentration and back. SI. */
export interface Calibration {
  readonly perUnit: Unit;
  /** The unit of the detector. */
  readonly rawUnit: Unit;
  /** Raw values of the first and last standard, SI; undefined where there are none. */
  readonly range?: readonly [number, number];
  /** In words, where it was fitted. */
  readonly says?: string;
  /** Of a raw value; NaN where the curve never gets there. */
  readonly concentration: (raw: number) => number;
  readonly raw: (concentration: number) => number;
  /** Concentration per raw value, at a raw value. */
  readonly slope: (raw: number) => number;
  /** Change of the concentration at a raw value for one standard deviation of each thing that the standards leave open. */
  readonly doubts: (raw: number) => readonly number[];
}

/** What a reading is of and where, for people: `base at flask`, or the place alone where it is of the tracer. */
export const readingLabel = ({ at, of }: { readonly at: string; readonly of?: ReadSpecies | undefined }): string =>
  of ? `${of.name} at ${at}` : at;

/** The concentration of every point of a reading, SI; undefined for a draft. */
export const concentrationsOf = ({ stages, series }: Reading): Float64Array | undefined =>
  stages[stages.length - 1]?.value ?? series?.value;
