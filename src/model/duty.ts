import type { Span } from "../text/source.js";
import type { Dimension } from "../units/dimension.js";
import type { Chemistry } from "./chemistry.js";
import type { Value } from "./value.js";

/** One operating point: what is fed, and what counts. */
export interface Duty {
  readonly title: string;
  readonly at: Span;
  readonly path: string;
  readonly chemistry: Chemistry | undefined;
  /** Flows of this duty by feed name. */
  readonly flows: ReadonlyMap<string, Placed>;
  /** Those that change in time, by feed; `flows` has what they are before. */
  readonly flowCourses?: ReadonlyMap<string, FeedCourse>;
  /** Constants of the chemistry set otherwise here. */
  readonly with: ReadonlyMap<string, Placed>;
  /** Constants and parameters of the network set otherwise here: the names that the chemistry does not have. */
  readonly settings: ReadonlyMap<string, Placed>;
  /** Feed concentrations: feed name -> species -> value. A species left out is not fed. */
  readonly feeds: ReadonlyMap<string, DutyFeed>;
  /** What holds in some bodies only, by the name of a compartment, a member of one or a part. */
  readonly local?: ReadonlyMap<string, LocalDuty>;
  /** Where a transient starts; undefined where the duty does not say. */
  readonly contents?: DutyContents | undefined;
  /** K, everywhere (isothermal). */
  readonly temperature: Value | undefined;
  /** Heat balances in place of one temperature; every feed then has its own. */
  readonly heat?: HeatDuty | undefined;
  /** Dimension of the concentration of each species of the chemistry. */
  readonly concentrations: readonly Dimension[];
  readonly report: readonly Reported[];
  readonly regulated?: Regulated | undefined;
}

/** A value under a name of its own, and where that name stands. */
export interface Placed {
  readonly at: Span;
  readonly value: Value;
}

export interface DutyFeed {
  readonly at: Span;
  /** K; of one that changes in time, what it is before. */
  readonly temperature?: Value | undefined;
  /** Of one that changes in time, what it is before. */
  readonly species: ReadonlyMap<string, Placed>;
  /** Those that change in time, by species; that of the temperature under `temperature`. */
  readonly courses?: ReadonlyMap<string, FeedCourse>;
}

/** How a feed value goes on in time: an upset, or a log. */
export type FeedCourse =
  | {
      readonly is: "upset";
      readonly to: Value;
      /** s; `lasting` undefined: for good. */
      readonly start: number;
      readonly lasting: number | undefined;
    }
  /** Straight between rows: s from 0 on, ascending, and SI. */
  | { readonly is: "logged"; readonly times: Float64Array; readonly values: Float64Array };

/** What places hold at the start: by compartment, part, member or cell, or `all`, the concentrations of species. */
export interface DutyContents {
  readonly at: Span;
  readonly levels: ReadonlyMap<string, DutyFeed>;
}

/** What a duty sets otherwise in one place. */
export interface LocalDuty {
  readonly at: Span;
  /** Constants of the chemistry, by name. */
  readonly constants: ReadonlyMap<string, Placed>;
}

/** Where heat goes: everything is adiabatic but what has a jacket. */
export interface HeatDuty {
  readonly at: Span;
  /** By the name of a compartment, a member of one or a part. */
  readonly jackets: ReadonlyMap<string, Jacket>;
  /** Feeds that what leaves warms or cools. */
  readonly exchangers: readonly Exchanger[];
}

/** Heat that passes between a feed, before it enters, and what leaves at an outlet, in counterflow. */
export interface Exchanger {
  readonly at: Span;
  readonly feed: string;
  readonly outlet: string;
  /** Share of the largest difference that could be made; or coefficient times area, W/K. */
  readonly size: { readonly is: "effectiveness" | "conductance"; readonly value: Value };
}

export interface Jacket {
  readonly at: Span;
  /** K, the same along the whole body. */
  readonly temperature: Value;
  /** Coefficient times area, W/K, spread over the volume of what the jacket surrounds. */
  readonly conductance: Value;
}

/** A figure that a duty asks for. `at` undefined: over all outlets together. */
export interface Reported {
  readonly text: string;
  readonly place: Span;
  readonly what:
    | "conversion"
    | "yield"
    | "selectivity"
    | "log-removal"
    | "concentration"
    | "temperature"
    | "tracer-time"
    | "time-beyond";
  /** The species; empty for temperature and tracer-time, and for a time beyond a limit of the temperature. */
  readonly of: string;
  /** `yield of P from A`, `selectivity of P over S`: the second species. */
  readonly versus: string | undefined;
  /** tracer-time: 10 for t10. */
  readonly percent: number | undefined;
  /** time-beyond: the limit, and on which side of it time counts. */
  readonly limit?: { readonly side: "above" | "below"; readonly value: Value };
  readonly at: string | undefined;
}

/** What a regulator's contact-time method asks: figures that the duty declares, none is built in. SI. */
export interface Regulated {
  readonly at: Span;
  /** The outlet. */
  readonly outlet: string;
  readonly outletAt: Span;
  /** Disinfectant left at the outlet, as the operator measures it, kg/m3. */
  readonly residual: Value | undefined;
  /** Baffling factor that the regulator has assigned, in place of t10 of the network. */
  readonly bafflingFactor: Value | undefined;
  /** Contact time (kg s/m3) that the regulator's table asks for so many decades. */
  readonly inactivation: readonly {
    readonly name: string;
    readonly at: Span;
    readonly log: Value;
    readonly ct: Value;
  }[];
}
