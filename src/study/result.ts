import type { Plant } from "../compile/plant.js";
import type { MomentsResult } from "../data/moments.js";
import type { Fit } from "../fit/result.js";
import type { Duty } from "../model/duty.js";
import type { AimAsked, Asked, ChangeDocument, Rival, Study, SweepAsked } from "../model/study.js";
import type { Trial } from "../model/trial.js";
import type { FurtherTest } from "../plan/further.js";
import type { SameCurve } from "../plan/same-curve.js";
import type { Problem } from "../problems/problem.js";
import type { RegulatedFigures } from "../reaction/regulated.js";
import type { SteadyState } from "../reaction/steady.js";
import type { Unit } from "../units/unit.js";
import type { Across } from "./across.js";
import type { AimResult } from "./aim.js";
import type { DiversionWindow } from "./diversion.js";
import type { FineCurve } from "./fine-curves.js";
import type { InTime } from "./in-time.js";
import type { Nested } from "./nested.js";
import type { OtherStates } from "./other-states.js";
import type { Standing } from "./rank.js";
import type { Residence } from "./residence.js";
import type { Spread } from "./spread-shares.js";
import type { Sweep } from "./sweep.js";

/** Everything that a study found out. SI, with units for people beside. */
export interface StudyResult {
  readonly study: Study;
  /** Best first; rivals without a fit last. */
  readonly ranking: readonly Ranked[];
  /** The log of each trial alone, no model. */
  readonly readings: readonly { readonly trial: Trial; readonly moments: MomentsResult }[];
  /** Their curves held against one another, no model; undefined where no place was read in two trials. */
  readonly across: Across | undefined;
  /** Every duty for the best rival, and for the others that survive. */
  readonly predictions: readonly Prediction[];
  readonly changes: readonly ChangeOutcome[];
  /** What to do by each surviving rival, and whether they agree. */
  readonly decisions: readonly Decision[];
  /** Tests on which the best two surviving rivals differ, the most telling first. */
  readonly telling: readonly TellingTest[];
  /** For every rival that survives and every duty that declares such figures. */
  readonly regulated: readonly RegulatedOutcome[];
  /** For every rival that survives, in the order of the ranking. */
  readonly sweeps: readonly Answered<SweepAsked, Sweep>[];
  readonly aims: readonly Answered<AimAsked, AimResult>[];
  /** Rivals that are special cases of others, tested by F. */
  readonly nested: readonly Nested[];
  /** Networks of the library that show the curve of the best rival, though they are other vessels. */
  readonly sameCurves: readonly SameCurve[];
  /** Further tests of the best rival, the most telling first. */
  readonly further: readonly FurtherTest[];
  /** Fitted curves of the best rival between the samples of readings with few of them, by the reading's key. */
  readonly fine: ReadonlyMap<string, FineCurve>;
  /** Of the best rival. */
  readonly residence: Residence | undefined;
  /** Draws that intervals rest on. */
  readonly draws: number;
  readonly stopped: "cancelled" | undefined;
  readonly converged: boolean;
}

/** What a study asked of a rival, or why it could not be asked. */
export type Answered<A extends Asked, R> = { readonly asked: A; readonly rival: Rival } & (
  | { readonly found: R; readonly skipped?: undefined }
  | { readonly found?: undefined; readonly skipped: string }
);

export interface Ranked {
  readonly rival: Rival;
  readonly fit: Fit | undefined;
  /** Why there is no fit. */
  readonly problems: readonly Problem[];
  readonly standing: Standing;
  readonly survives: boolean;
  /** At the fitted values. */
  readonly plant: Plant | undefined;
}

/** One figure of one duty by one rival. */
export interface Prediction {
  readonly rival: Rival;
  readonly duty: Duty;
  readonly name: string;
  readonly value: number;
  readonly unit: Unit;
  /** 2.5 to 97.5 % of the draws; undefined where too few draws gave a figure. */
  readonly interval95: readonly [number, number] | undefined;
  /** One-sided: what 95 % of the draws keep, on the side that hurts; undefined where better has no direction. */
  readonly oneSided95: { readonly bound: "at least" | "at most"; readonly value: number } | undefined;
  readonly bounds: Bounds | undefined;
  /** What holds its variance; undefined where nothing is unsure. */
  readonly spread: Spread | undefined;
  readonly steady: SteadyState;
  /** Further steady states; undefined where one was found and nothing is against it. */
  readonly states: OtherStates | undefined;
  /** Of a time beyond a limit in a duty that changes: when to turn away what leaves, over the draws. */
  readonly diversion: DiversionWindow | undefined;
  /** What leaves in time, where the duty changes in time. */
  readonly course: InTime | undefined;
  /** The vessel as it is operated there. */
  readonly plant: Plant;
}

/** What the same curve would give with mixing as late or as early as it allows. */
export interface Bounds {
  readonly segregated: number;
  readonly maximumMixedness: number;
  /** 0 at complete segregation, 1 at maximum mixedness; undefined where they coincide. */
  readonly position: number | undefined;
  /** Whether they bound, in a sentence. */
  readonly says: string;
  readonly apply: "yes" | "no" | "not checked";
}

/** What a change does to one figure of one rival, by draws shared with the present vessel. */
export interface ChangeOutcome {
  readonly change: ChangeDocument;
  readonly rival: Rival;
  /** Why it was left out for this rival; then there are no figures. */
  readonly skipped: string | undefined;
  readonly plant: Plant | undefined;
  readonly figures: readonly ChangedFigure[];
}

export interface ChangedFigure {
  readonly duty: Duty;
  readonly name: string;
  readonly unit: Unit;
  readonly before: number;
  readonly value: number;
  readonly interval95: readonly [number, number] | undefined;
  /** Of the difference to the present vessel, draw by draw. */
  readonly difference95: readonly [number, number] | undefined;
  /** Share of the draws in which the figure is better; undefined where better has no direction. */
  readonly probabilityBetter: number | undefined;
}

/** What a duty declares of a contact-time method, worked out for a rival. */
export interface RegulatedOutcome {
  readonly rival: Rival;
  readonly duty: Duty;
  readonly figures: RegulatedFigures;
  /** s: 95 % of the draws have at least this t10 (one-sided); undefined where too few gave one. */
  readonly lower: number | undefined;
}

/** What every network that the data leave standing would have one do for one figure. */
export interface Decision {
  /** Index into the duties of the study, and into the report of that duty. */
  readonly duty: number;
  readonly line: number;
  readonly name: string;
  /** By every surviving rival, best first. */
  readonly choices: readonly Choice[];
  /** Do they differ? Then the data do not support the decision yet. */
  readonly flips: boolean;
  /** Changes by their chance of being better, averaged over the rivals with their Akaike weights; the surest first. */
  readonly averaged: readonly { readonly change: ChangeDocument; readonly probabilityBetter: number }[];
}

export interface Choice {
  readonly rival: Rival;
  /** Of the rivals that survive, adding to 1. */
  readonly weight: number;
  /** The change that brings most; undefined: none is likely to be better than the vessel as it is. */
  readonly change: ChangeDocument | undefined;
  /** What it brings, in the figure's SI unit, above 0 where it is better; and how likely it is better at all. */
  readonly gain: number;
  readonly probabilityBetter: number | undefined;
}

/** A further test on which two rivals differ. */
export interface TellingTest {
  readonly rivals: readonly [Rival, Rival];
  readonly says: string;
  /**
   * Root mean square of the difference of the two curves over what a reading scatters and what the fits leave open; above 1
   * even a few readings tell.
   */
  readonly apart: number;
}
