import type { Decision, StudyResult, TellingTest } from "../../study/result.js";
import { chance } from "../digits.js";

/** What all networks that survive would have one do, or that they do not agree; nothing where there is only one. */
export function decisionWords(result: StudyResult): string[] {
  return result.decisions.filter((d) => d.choices.length > 1).map((d) => wordsOf(result, d));
}

function wordsOf(result: StudyResult, { duty, name, choices, flips, averaged }: Decision): string {
  const what = `${name}, ${result.study.duties[duty].title}`;
  const say = (c: Decision["choices"][number]): string => (c.change ? `'${c.change.title}'` : "no change");
  const first = averaged[0];
  const sure = first
    ? ` Over all of them, weighed by how well they explain the tests, the chance that '${first.change.title}' is better is ${chance(first.probabilityBetter)}.`
    : "";
  if (!flips) return `${what}: every network that is not ruled out says ${say(choices[0])}.${sure}`;
  const by = choices.map((c) => `'${c.rival.network.title}' (${chance(c.weight)}) says ${say(c)}`).join("; ");
  return `${what}: the decision flips between networks that fit about as well: ${by}. Settle that before money is spent.${sure}`;
}

/** A difference below this would need many readings to be seen. */
const tells = 0.5;

/** The test that would tell the best two networks apart; undefined where none is known to. */
export function tellingWords([best]: readonly TellingTest[]): string | undefined {
  if (!best) return undefined;
  const names = best.rivals.map((r) => `'${r.network.title}'`).join(" and ");
  if (best.apart < tells)
    return `No test that was thought of tells ${names} apart; a probe or a substance of another kind may`;
  return `${best.says} would tell ${names} apart best: there they lie ${best.apart.toPrecision(2)} times the scatter of a reading apart`;
}
