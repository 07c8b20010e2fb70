import { onlySwings } from "../../study/other-states.js";
import type { ChangedFigure, ChangeOutcome, Prediction, StudyResult } from "../../study/result.js";
import type { Unit } from "../../units/unit.js";
import { chance, estimateLine, figureLine } from "../digits.js";
import type { AnswerLine } from "../input.js";
import { aimWords } from "./aim-words.js";
import { steadyTitle } from "./before-change.js";
import { decisionWords, tellingWords } from "./decision-words.js";
import { spreadWords } from "./driver-words.js";
import { differenceEstimate, estimate, readingUnit } from "./estimate.js";
import { beyondAim, beyondWords } from "./tested.js";
import { traitsOf } from "./traits.js";
import { isUntested } from "./untested.js";

/** The answer in about five lines: what is wrong, how sure, what it makes, what a change brings, what is still open. */
export function answerOf(result: StudyResult): AnswerLine[] {
  const best = result.ranking[0];
  if (result.stopped) return [{ about: "Interrupted", says: interrupted(result) }];
  if (best?.plant && isUntested(result)) return untestedAnswer(result);
  if (!best?.fit || !best.plant) {
    return [{ about: "No answer", says: "No network could be fitted to these trials; see the findings." }];
  }
  if (best.fit.findings.some((f) => f.code === "explains-nothing")) {
    const says =
      "No network that was tried explains these trials better than a flat line: check dose, units, time zero and outlet before anything else.";
    return [{ about: "No answer", says }];
  }
  const lines = traitsOf(best.plant, best.fit).map((t) => t.line);
  const wrong =
    lines.length > 0
      ? `${capital(lines.join("; "))}.`
      : "The best network shows none of these: a bypass of the whole vessel, dead water, a quiet zone, a recycle.";
  return [
    { about: "What is wrong", says: wrong },
    { about: "How sure", says: sure(result) },
    ...makes(result).map((says) => ({ about: "What it makes", says })),
    ...bestChange(result).map((says) => ({ about: "What to do", says })),
    ...flips(result).map((says) => ({ about: "What to do", says })),
    ...takes(result).map((says) => ({ about: "What it takes", says })),
    ...measure(result).map((says) => ({ about: "What to measure", says })),
    { about: "Still open", says: open(result) },
  ];
}

/** Nothing was measured: what the files say is what there is. */
function untestedAnswer(result: StudyResult): AnswerLine[] {
  const names = result.ranking.filter((r) => r.survives).map((r) => `'${r.rival.network.title}'`);
  const taken =
    names.length > 1
      ? `${names.join(", ")} are taken as they are written, and nothing tells which is right; the lines below are of the first`
      : `${names[0]} is taken as it is written`;
  return [
    {
      about: "How sure",
      says: `No test stands behind this: ${taken}. Intervals carry only the ± that the files declare.`,
    },
    ...makes(result).map((says) => ({ about: "What it makes", says })),
    ...bestChange(result).map((says) => ({ about: "What to do", says })),
    ...flips(result).map((says) => ({ about: "What to do", says })),
    ...takes(result).map((says) => ({ about: "What it takes", says })),
    ...measure(result).map((says) => ({ about: "What to measure", says })),
    {
      about: "Still open",
      says: "Whether the vessel is as it is written. Plan a tracer test (`backmix plan`) and give it under `trials:` before money is spent.",
    },
  ];
}

function interrupted(result: StudyResult): string {
  const done = result.ranking.filter((r) => r.fit && !r.fit.stopped).length;
  return `Only ${done} of ${result.ranking.length} networks were fitted, so none is ruled out and nothing is concluded.`;
}

function sure(result: StudyResult): string {
  const [best, ...others] = result.ranking;
  const equals = others.filter((r) => r.survives);
  const name = `'${best.rival.network.title}'`;
  const caveat = best.fit?.converged ? "" : " Its fit did not converge: read it as a first look.";
  if (equals.length > 0) {
    const names = equals.map((r) => `'${r.rival.network.title}' (${chance(r.standing.weight)})`).join(", ");
    return `This rests on ${name} (weight ${chance(best.standing.weight)}), but the data do not rule out ${names}.${caveat}`;
  }
  if (others.length === 0) return `This rests on ${name}, the only network tried: ${untried(result)}${caveat}`;
  const next = others.find((r) => r.fit);
  const behind = next
    ? `; the next, '${next.rival.network.title}', is ${Math.round(next.standing.difference)} AICc units behind`
    : "";
  return `Of ${result.ranking.length} networks tried, ${name} explains the tests far best${behind}. ${untried(result)}${caveat}`;
}

function untried({ sameCurves }: StudyResult): string {
  if (sameCurves.length === 0) return "Networks that were not tried may do as well.";
  const names = sameCurves.map((s) => `'${s.title}'`).join(", ");
  return `No test at the outlet tells it from ${names}; other networks that were not tried may do as well.`;
}

function makes(result: StudyResult): string[] {
  const best = result.ranking[0];
  const first = result.predictions.filter((p) => p.rival === best.rival);
  const duties = [...new Set(first.map((p) => p.duty))];
  return duties.flatMap((duty) => {
    const p = first.find((x) => x.duty === duty);
    if (!p) return [];
    const unit = readingUnit(duty, p.name, p.unit);
    const now = `${steadyTitle(duty, p.name)}: ${p.name} ${figureLine(p.name, estimate(p.value, p.interval95, unit))}${beyondWords(result.study, duty)}`;
    const other = otherState(p, first.filter((x) => x.duty === duty).indexOf(p), unit);
    if (!p.bounds || p.bounds.apply === "no") return [`${now}.${other}`];
    if (p.bounds.position === undefined) return [`${now}; with these rates the residence times alone fix it.${other}`];
    const low = estimateLine(estimate(Math.min(p.bounds.segregated, p.bounds.maximumMixedness), undefined, unit));
    const high = estimateLine(estimate(Math.max(p.bounds.segregated, p.bounds.maximumMixedness), undefined, unit));
    return [`${now}; late or early mixing of the same flow pattern would give ${low} to ${high}.${other}`];
  });
}

/** That the vessel may as well run at another steady state, with the figure that is farthest from this. */
function otherState({ states, value, name }: Prediction, line: number, unit: Unit): string {
  const followed = states?.states.find((s) => s.reached);
  if (states && onlySwings(states))
    return " No stable state was found: the vessel swings and does not settle; how far, simulate with --transient shows.";
  if (followed?.stable === false) return " That state is unstable: the vessel does not stay there.";
  const others = (states?.states ?? []).filter((s) => !s.reached && s.stable !== false);
  const far = others
    .map((s) => s.figures[line]?.value ?? Number.NaN)
    .filter(Number.isFinite)
    .sort((a, b) => Math.abs(b - value) - Math.abs(a - value))[0];
  if (far === undefined) return "";
  return ` It may as well run at another steady state, with ${figureLine(name, estimate(far, undefined, unit))}: which one depends on how it came there.`;
}

function bestChange(result: StudyResult): string[] {
  const best = result.ranking[0];
  const told = result.changes
    .filter((c) => c.rival === best.rival && c.figures.length > 0)
    .map((c): { c: ChangeOutcome; f: ChangedFigure } => ({ c, f: c.figures[0] }))
    .sort((a, b) => gain(b.f) - gain(a.f));
  if (told.length === 0) return [];
  const { c, f } = told[0];
  const none = gain(f) > 0 ? "" : "None of the changes looked at is likely to help. ";
  const unit = readingUnit(f.duty, f.name, f.unit);
  const now = figureLine(f.name, estimate(f.before, undefined, unit));
  const then = figureLine(f.name, estimate(f.value, f.interval95, unit));
  const by = estimateLine(differenceEstimate(f.value - f.before, f.difference95, unit));
  const sure = f.probabilityBetter === undefined ? "" : `; chance of being better ${chance(f.probabilityBetter)}`;
  return [
    `${none}${c.change.title}: ${f.name} from ${now} to ${then}, by ${by}${sure}${beyondWords(result.study, f.duty)}.`,
  ];
}

/** That networks which fit about as well would have one do different things: of the first figure. */
function flips(result: StudyResult): string[] {
  return decisionWords(result)
    .slice(0, 1)
    .filter((_, k) => result.decisions.filter((d) => d.choices.length > 1)[k].flips);
}

/** The first aims, by the best rival. */
function takes(result: StudyResult): string[] {
  const own = result.aims.filter((a) => a.rival === result.ranking[0].rival);
  return own.slice(0, mostAims).flatMap(({ found, asked }) => {
    if (!found) return [];
    const change = asked.change ? ` With '${asked.change.title}'.` : "";
    const beyond = beyondAim(result.study, asked, found);
    return [[`${asked.duty.title}: ${aimWords(found)[0]}${change}`, beyond].filter((s) => s !== "").join(" ")];
  });
}

/** More would hide the answer; the others have their section. */
const mostAims = 2;

/** Of the first figure of the first duty: what holds its uncertainty. */
function measure(result: StudyResult): string[] {
  const p = result.predictions.find((x) => x.rival === result.ranking[0].rival);
  const says = spreadWords(p?.spread);
  return p && says !== undefined ? [`Of ${p.name}, ${says}.`] : [];
}

const gain = (f: ChangedFigure): number =>
  f.probabilityBetter === undefined ? 0 : (f.probabilityBetter - 0.5) * Math.abs(f.value - f.before);

function open(result: StudyResult): string {
  const best = result.ranking[0];
  const equals = result.ranking.filter((r) => r.survives).length;
  if (equals > 1) {
    const test = tellingWords(result.telling);
    return test === undefined
      ? "Which of the equal networks is right. A test at another flow or stirrer speed, or a probe inside the vessel, would tell."
      : `Which of the equal networks is right. ${capital(test)}.`;
  }
  const loose = best.fit?.findings.filter((f) => f.code === "cannot-tell" || f.code === "parameter-at-bound") ?? [];
  if (loose.length > 0) return `${capital(loose[0].message)}. ${capital(loose[0].fix)}.`;
  const trials = result.readings.length;
  if (trials < 2) return "One test says nothing of the next day. Repeat it, best at another flow.";
  if (result.across?.findings.some((f) => f.code === "repeats-differ"))
    return "Why tests under the same conditions differ: no figure here is surer than they agree. Look for what changed, and repeat one test before money is spent.";
  return "Whether the vessel is the same on another day. Repeat one test before money is spent, and again after the change.";
}

const capital = (words: string): string => words.charAt(0).toUpperCase() + words.slice(1);
