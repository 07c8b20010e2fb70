import type {
  Analysis,
  AnswerLine,
  CautionTriggers,
  Change,
  DataQuality,
  Figure,
  Identifiability,
  Prediction,
  Provenance,
  ReportAim,
  ReportFinding,
  ReportParameter,
  ReportRegulated,
  Rival,
} from "./parts.js";

export type * from "./parts.js";

/** Everything a study's report says, in the units that people read. Sentences are ready to print, without a full stop where short. */
export interface StudyReport {
  readonly title: string;
  /**
   * The answer in about five lines: what is wrong with the vessel and how sure, what it makes now, the best change and
   * what it would bring, the one test that would settle what is open.
   */
  readonly answer: readonly AnswerLine[];
  /** The vessel as fitted. */
  readonly vessel?: Figure;
  /** Measured beside fitted curves, with what is left between them. */
  readonly curves: readonly Figure[];
  /** Analyses of a vessel that had settled, beside what the fit gives there. */
  readonly analyses?: readonly Analysis[];
  readonly data: readonly DataQuality[];
  /** What bears on the worth of the tests, once for all that it is true of. */
  readonly dataRemarks?: readonly ReportFinding[];
  readonly findings: readonly ReportFinding[];
  /** What one might expect but the data do not show, each with what was seen, test by test. */
  readonly notSupported: readonly { readonly what: string; readonly says: readonly string[] }[];
  readonly rivals: readonly Rival[];
  /** "bypass and corner fit equally well": what these data cannot tell apart. */
  readonly equals: readonly string[];
  /** Whether the data ask for what a rival has more than its special case. */
  readonly nested?: readonly string[];
  /** Rivals over the same points. */
  readonly rivalCurves: readonly Figure[];
  readonly parameters: readonly ReportParameter[];
  readonly identifiability: Identifiability;
  /** Distributions of residence time and age of the vessel as fitted. */
  readonly residence: readonly Figure[];
  readonly predictions: readonly Prediction[];
  /** Steady states beside those of the predictions, in sentences; none where none was found. */
  readonly states?: readonly string[];
  /** When to turn away what leaves, of duties that go on in time, in sentences. */
  readonly diversion?: readonly string[];
  /** What the liquid is like along the bodies that it flows through, by duty. */
  readonly along: readonly Figure[];
  /** What leaves over time, by duty that changes in time. */
  readonly inTime: readonly Figure[];
  /** Figures of a regulator's method, a table for each duty that declares one. */
  readonly regulated: readonly { readonly about: string; readonly lines: readonly ReportRegulated[] }[];
  readonly changes: readonly Change[];
  /** Whether all networks that survive would have one do the same. */
  readonly decisions: readonly string[];
  /** Figures of duties over their inputs. */
  readonly sweeps: readonly Figure[];
  /** Where they jump, and where there are further steady states. */
  readonly sweepSays?: readonly string[];
  readonly aims: readonly ReportAim[];
  readonly assumptions: readonly string[];
  readonly cautions: CautionTriggers;
  /** What was tested: flows, temperatures, dates; one line each. */
  readonly tested: readonly string[];
  readonly provenance: Provenance;
}
