import { acrossWording } from "./across-wording.js";

/** What a curve says, or cannot say. Every sentence stands on numbers: they are in `evidence`. */
export interface Finding {
  readonly code: FindingCode;
  /** The place of the reading. */
  readonly at: string;
  /** How bad: `note` tells, `caution` limits the use of the figures, `stop` leaves no figure. */
  readonly weight: "note" | "caution" | "stop";
  readonly message: string;
  readonly evidence: string;
  /** What else could make the same sign. */
  readonly couldBe: string;
  /** What to do or check next. */
  readonly next: string;
}

export type FindingCode = keyof typeof wording;

/** Builds a finding; the catalogue words all of it but the numbers. */
export function finding(code: FindingCode, at: string, evidence: string): Finding {
  return { code, at, evidence, ...wording[code] };
}

/** Findings of the data alone, in one place. */
const wording = {
  ...acrossWording,
  "no-signal": {
    weight: "stop",
    message: "the reading never changes: there is no curve to read",
    couldBe: "the wrong column, a detector that was off, or a dose that never came by",
    next: "check the column and the detector; repeat the test if the log is right",
  },
  "only-noise": {
    weight: "stop",
    message: "the reading is not told from noise: there is no curve to read",
    couldBe: "too small a dose, the wrong column, or a detector at its limit",
    next: "plan a larger dose; a peak should be 50 times the noise or more",
  },
  "few-points": {
    weight: "stop",
    message: "too few points lie on the curve for moments",
    couldBe: "sampling too sparse for a short vessel",
    next: "sample at least 10 times over the rise and the peak",
  },
  "no-area": {
    weight: "stop",
    message: "the area under the curve is not above zero",
    couldBe: "a baseline or blank that is too high, or a calibration with the wrong sign",
    next: "check the blank, the calibration and the baseline",
  },
  "several-injections": {
    weight: "stop",
    message: "several injections overlap in one curve: without a model it cannot be taken apart",
    couldBe: "one test logged as several",
    next: "fit a network, or read each injection as a trial of its own",
  },
  "step-level": {
    weight: "stop",
    message: "the level of the step is not known and the reading does not settle",
    couldBe: "a test stopped too early",
    next: "give the level in the reading's unit, or measure until it settles",
  },
  "recovery-low": {
    weight: "caution",
    message: "less tracer came out than went in",
    couldBe:
      "sorption or reaction, a part that passed between two readings (a bypass), an outlet not measured or fed otherwise than by its flow, a tail not waited for, or a wrong dose, flow or calibration",
    next: "check dose, flow and calibration; look for a second way out; read faster at first; measure longer",
  },
  "recovery-high": {
    weight: "caution",
    message: "more tracer came out than went in",
    couldBe: "a wrong dose, flow or calibration, a baseline that was not taken off, or tracer that came round again",
    next: "check the blank and the dose; measure the inlet where the plant recycles",
  },
  "tail-share": {
    weight: "caution",
    message: "a large part of the figures comes from the extrapolated tail",
    couldBe: "a test stopped too early, or slow exchange with a stagnant zone",
    next: "measure longer; t10 and t50 suffer least",
  },
  "tail-open": {
    weight: "caution",
    message: "the curve has not come down, and its end shows no steady decay: area, mean and variance are cut short",
    couldBe: "a test stopped too early, a baseline that is too low, or tracer that came round again",
    next: "measure longer, or declare the baseline; do not read dead volume from this mean",
  },
  "tail-power": {
    weight: "caution",
    message: "the tail falls like a power of time: mean and variance have no limit that these data show",
    couldBe: "exchange over a wide range of times, as in wetlands and packed beds",
    next: "use t10 and t50, or fit a network and report its range of validity",
  },
  "baseline-unknown": {
    weight: "caution",
    message: "the baseline asked for cannot be told: no point lies before the injection and the end has not settled",
    couldBe: "a log that starts with the injection",
    next: "start the log ten points before the injection",
  },
  "drift-unknown": {
    weight: "note",
    message: "a drift needs points before the injection and after the tail: a constant was taken off",
    couldBe: "a log that starts late or ends early",
    next: "log before the injection and until the reading has settled",
  },
  "tail-hidden": {
    weight: "caution",
    message: "a slow tail that cannot be told from baseline and noise could change the mean",
    couldBe: "a tail with a time constant of a quarter of the record or more, or none at all",
    next: "measure longer, with more tracer; log before the injection and a blank at the end; fit a network, which knows the volume",
  },
  "tail-with-baseline": {
    weight: "caution",
    message:
      "a slow tail still lay over the end of the record: baseline and tail were fitted together, as a straight line and decays",
    couldBe: "slow exchange with a stagnant zone; a drift that is not straight would look like it",
    next: "compare with the fitted networks; measure longer; measure a blank at the end to know the drift",
  },
  "baseline-left": {
    weight: "caution",
    message: "the reading was not at zero before the injection, and no baseline is declared",
    couldBe: "background of the tracer, or a blank that is off",
    next: "declare `baseline: constant`",
  },
  "early-part": {
    weight: "caution",
    message: "the first reading is already high: what came before it was not seen",
    couldBe: "a bypass, or sampling that began late",
    next: "sample from the injection on",
  },
  bypass: {
    weight: "note",
    message: "part of the tracer came far ahead of the rest: a bypass",
    couldBe: "poor mixing at the injection, a clock that is off, a plume that sank or rose",
    next: "repeat with a diluted slug; sample at a second depth of the outlet",
  },
  "slow-exchange": {
    weight: "note",
    message: "the tail decays far more slowly than the main part: exchange with a zone that is nearly still",
    couldBe: "a drifting baseline, a tracer that sorbs, tracer that came round again",
    next: "repeat with another tracer; measure the baseline upstream, too",
  },
  "intensity-falls": {
    weight: "note",
    message: "what has stayed longer leaves less readily: stagnant volume or parallel paths (escape intensity)",
    couldBe: "a drifting baseline, a tracer that sorbs",
    next: "compare networks with a corner and with two paths; repeat at another flow",
  },
  loop: {
    weight: "note",
    message: "peaks follow one another evenly and fade: liquid circulates inside",
    couldBe: "plant water that comes round again, or doses given in pulses",
    next: "measure the inlet; compare the spacing with the plant's loop and the dosing pump",
  },
  "parallel-paths": {
    weight: "note",
    message: "several peaks without a period: paths in parallel with times and flows of their own",
    couldBe: "two injections, or a probe that draws from two places",
    next: "check the injection; read the paths apart",
  },
  "tube-then-tank": {
    weight: "note",
    message: "nothing, then a clean decay: plug flow and a stirred volume in a row, in whichever order",
    couldBe: "a sample line that was not declared, a time zero that is off",
    next: "check the sample line and the clock of the injection",
  },
  "near-plug": {
    weight: "note",
    message: "a narrow curve: near plug flow",
    couldBe: "a detector that is slower than the vessel would make it look wider, never narrower",
    next: "check that at least ten samples lie on the rise",
  },
  "well-mixed": {
    weight: "note",
    message: "highest at once, then one straight decay: one well-mixed volume",
    couldBe: "too few early samples, which would hide a bypass",
    next: "sample faster at the start",
  },
  "limits-above": {
    weight: "caution",
    message: "readings at the upper limit of the detector count as the limit itself: area and peak are too low",
    couldBe: "a detector in saturation",
    next: "fit a network, which takes them as censored; use less tracer or a wider range",
  },
  "limits-below": {
    weight: "note",
    message:
      "readings below the limit of detection: nothing is taken before the first above it, half the limit between, nothing after the last",
    couldBe: "too small a dose for the detector",
    next: "fit a network, which takes them as censored; use more tracer where the tail counts",
  },
  gap: {
    weight: "caution",
    message: "the log has a gap where tracer was passing: a straight line was drawn across it",
    couldBe: "a logger that stopped, or rows with words for missing values",
    next: "look for the missing rows; a fit needs no line across",
  },
  "flow-varied": {
    weight: "note",
    message:
      "the flow varied: recovery, effective volume, shape and indices are read over the volume that has passed; mean, variance and percentiles in time are those of this day",
    couldBe:
      "a vessel whose volume varied, too, or whose inner flows do not follow: then volumes are no measure either",
    next: "fit a network, which follows the logged flow; repeat at a steady flow for figures in time",
  },
  "noise-correlated": {
    weight: "note",
    message: "neighbouring errors hang together: standard errors are those of fewer points",
    couldBe: "a logger that smooths, or a slow wander of the detector",
    next: "log raw values; a blank run of the length of the test tells the wander",
  },
  "decay-corrected": {
    weight: "note",
    message: "readings were brought back to the activity at the start of the injection by the declared half-life",
    couldBe: "another nuclide beside it would show as a wrong late tail",
    next: "check the half-life and the clock of the dose",
  },
  "loss-corrected": {
    weight: "note",
    message: "the declared loss was taken out of the curve: recovery is that of a tracer that is not lost",
    couldBe: "a loss that is not the same everywhere in the vessel",
    next: "compare with a tracer that is not lost",
  },
  "loss-left": {
    weight: "caution",
    message: "the declared loss is still in the curve: without a model it cannot be taken out of a step",
    couldBe: "a level and a mean that are too low",
    next: "fit a network, which has the loss in it",
  },
  "mean-early": {
    weight: "note",
    message:
      "read without a model, the mean is shorter than volume over flow: part of the volume is not reached, or renewed so slowly that its tail is taken for baseline",
    couldBe: "a volume or flow that is off; a drift correction that takes a slow tail away",
    next: "compare with the fitted networks, which keep tail and drift apart; check volume and flow meter; measure longer",
  },
  "mean-late": {
    weight: "caution",
    message: "the mean is longer than volume over flow, which a closed vessel in steady flow does not allow",
    couldBe:
      "a wrong volume or flow, retention of the tracer, tracer that came round again, or an early peak that was missed",
    next: "check volume and flow meter; take early samples faster; try a second tracer",
  },
  "dead-or-tail": {
    weight: "note",
    message:
      "the mean is shorter than volume over flow, but too much of the curve was not seen: dead volume and a long tail cannot be told apart",
    couldBe: "either",
    next: "measure longer",
  },
} as const satisfies Record<string, Omit<Finding, "code" | "at" | "evidence">>;
