import type { FigureData } from "../draw/plotted.js";
import type { Svg } from "../svg/svg.js";

/** One analysis, in its own unit. */
export interface Analysis {
  readonly trial: string;
  /** `A at product`. */
  readonly of: string;
  readonly found: string;
  readonly fitted: string;
  /** Found less fitted, in standard deviations of the analysis. */
  readonly deviations: number;
}

/** One line of the answer, under a few words of what it is about: "How sure". */
export interface AnswerLine {
  readonly about: string;
  readonly says: string;
}

/** A drawing with its caption; the drawing brings its own words for those who cannot see it. */
export interface Figure {
  /** What its files are called when it is saved, and its place in the page: "fit-1". */
  readonly name: string;
  readonly drawing: Svg;
  readonly caption: string;
  /** The numbers behind it. */
  readonly data?: FigureData;
}

/** What the tests can tell of the parameters. */
export interface Identifiability {
  /** Sentences, the most important first. */
  readonly says: readonly string[];
  /** Pairs that move together, most first. */
  readonly correlations: readonly { readonly one: string; readonly other: string; readonly value: number }[];
  /** What further tests would narrow; left out where none was looked at. */
  readonly further?: FurtherTests;
  /** Regions of pairs, profiles. */
  readonly figures: readonly Figure[];
}

/** 95 % intervals of the parameters as they are and after one more test, in the units of the heads. */
export interface FurtherTests {
  /** "bypass, %" */
  readonly heads: readonly string[];
  readonly now: readonly string[];
  /** The most telling first; `width` in % of what it is now. */
  readonly tests: readonly { readonly says: string; readonly width: string; readonly after: readonly string[] }[];
}

/** A number with its 95 % interval; left out where none was worked out, NaN where the data cannot tell it. All in `unit`. */
export interface Estimate {
  readonly value: number | undefined;
  readonly unit: string;
  readonly low?: number | undefined;
  readonly high?: number | undefined;
}

export interface DataQuality {
  readonly trial: string;
  readonly at: string;
  readonly grade: string;
  /** Nothing in the log speaks against it. */
  readonly clean: boolean;
  /** Recovery, mean, t10 and the like. */
  readonly figures: readonly { readonly name: string; readonly estimate: Estimate }[];
  /** What each cleaning step left. Units in the order area, mean, variance, t10. */
  readonly steps: readonly {
    readonly name: string;
    readonly area: number;
    readonly mean: number;
    readonly variance: number;
    readonly t10: number;
  }[];
  readonly stepUnits: { readonly area: string; readonly time: string };
}

export interface ReportFinding {
  readonly message: string;
  readonly evidence: string;
  readonly couldBe?: string;
  readonly next?: string;
}

export interface Rival {
  /** What its curve is called in figures, where names must be short: "A". */
  readonly letter?: string;
  /** Its file, without folder. */
  readonly file?: string;
  readonly network: string;
  readonly freeParameters: number;
  readonly aicc: number;
  /** Akaike weight, 0 to 1. */
  readonly weight: number;
  /** Why it leads, or why it loses. */
  readonly verdict: string;
}

export interface ReportParameter {
  readonly name: string;
  readonly about?: string;
  readonly estimate: Estimate;
  readonly atBound?: "lower" | "upper" | undefined;
}

export interface Prediction {
  readonly duty: string;
  /** "conversion of A" */
  readonly name: string;
  readonly estimate: Estimate;
  /** "at least 2.1": what 95 % of the draws keep, where it is said one-sided. */
  readonly oneSided?: string;
  /** The same at full segregation and at maximum mixedness, in the same unit; left out where the bounds do not apply. */
  readonly bounds?: { readonly segregated: number; readonly maximumMixedness: number };
  /** Why there are no bounds, or what follows from where the value lies between them. */
  readonly boundsSay?: string;
  /** What to measure better: "k2 holds 71 % of what is unsure: ...". */
  readonly spreadSays?: string;
  /** How the shares were found. */
  readonly spreadMethod?: string;
  /** Which inputs hold the variance, most first; shares 0 to 1. */
  readonly drivers?: readonly { readonly name: string; readonly share: number }[];
}

export interface Change {
  readonly name: string;
  /** The compared quantity and duty: "conversion of A, normal production". */
  readonly quantity: string;
  readonly estimate: Estimate;
  /** The same quantity without the change. */
  readonly today: number;
  readonly probabilityBetter: number;
  /** Rivals for which it could not be tried, and why. */
  readonly skipped?: string;
}

/** One regulated figure in words. */
export interface ReportRegulated {
  readonly name: string;
  readonly value: string;
  /** What it is made of. */
  readonly from: string;
  /** One-sided 95 % lower bound. */
  readonly lower?: string;
}

/** What it takes to meet an aim. */
export interface ReportAim {
  /** "conversion of A >= 95 % by feed.flow, Normal production". */
  readonly question: string;
  /** The answer in sentences. */
  readonly says: readonly string[];
}

/** Which cautions of the trade apply. */
export interface CautionTriggers {
  /** Log-removal, inactivation or contact time is reported. */
  readonly disinfection?: boolean;
  /** Reactions release or take up heat. */
  readonly heat?: boolean;
  /** Toxic or corrosive species take part. */
  readonly toxic?: boolean;
  /** The product is a drug. */
  readonly drug?: boolean;
  /** Food or drug is held for sterility. */
  readonly aseptic?: boolean;
  /** The vessel holds water for drinking. */
  readonly drinkingWater?: boolean;
  readonly radiotracer?: boolean;
  /** Tracer comes round again. */
  readonly recirculates?: boolean;
  /** A reaction is fast against mixing. */
  readonly fastReaction?: boolean;
  /** No test stands behind any of it. */
  readonly untested?: boolean;
  /** Duties beyond what was tested: "feed 15 L/min, tested up to 10 L/min". */
  readonly extrapolated?: readonly string[];
}

export interface Provenance {
  readonly files: readonly { readonly path: string; readonly sha256: string }[];
  readonly seed: number;
  readonly version: string;
  readonly command: string;
}
