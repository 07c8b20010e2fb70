import type { Aim } from "../../model/aim.js";
import type { Duty, Reported } from "../../model/duty.js";
import type { Figure } from "../../reaction/figures.js";
import type { AimResult } from "../../study/aim.js";
import type { Input } from "../../study/inputs.js";
import { type OtherStates, onlySwings, type StateFigures } from "../../study/other-states.js";
import type { StudyResult } from "../../study/result.js";
import type { Sweep } from "../../study/sweep.js";
import { formatQuantity } from "../../units/format.js";
import type { Unit } from "../../units/unit.js";

/** What is to be said of steady states beside those of a sweep; nothing where none was found. */
export function sweepStatesWords({ others, axes, operation }: Sweep): string[] {
  return statesWords(
    others,
    axes.map((a) => a.input),
    operation.duty,
    "The figures above are of",
  );
}

/** The same of an aim, with whether the other states meet it. */
export const aimStatesWords = ({ others, range, aim, operation }: AimResult): string[] =>
  statesWords(others, [range.input], { ...operation.duty, report: [aim.line] }, "The answer holds for", aim);

/** The same of one duty. */
export const dutyStatesWords = (found: OtherStates | undefined, duty: Told): string[] =>
  found ? statesWords([found], [], duty, "The figures are of") : [];

/** What a duty says of where it starts, and what it reports. */
type Told = Pick<Duty, "report" | "contents">;

function statesWords(
  others: readonly OtherStates[],
  inputs: readonly Input[],
  { report: lines, contents }: Told,
  subject: string,
  aim?: Aim,
): string[] {
  const words: string[] = [];
  const range = (list: readonly OtherStates[]): string => placesOf(list, inputs);
  const several = others.filter((o) => o.states.length > 1);
  const swinging = others.filter(onlySwings);
  const away = others.filter((o) => !onlySwings(o) && o.states.some((s) => s.reached && s.stable === false));
  if (several.length > 0) {
    const one = worst(several, aim);
    const [shown] = one.states.filter((s) => !s.reached && s.stable !== false && !meets(s, aim)).slice(-1);
    const other = shown ?? one.states.filter((s) => !s.reached).at(-1);
    const kind =
      other?.stable === undefined ? "another" : other.stable ? "another stable one" : "another, unstable one";
    const against = aim && aim.sign !== "=" && other && !meets(other, aim) ? ", which does not meet the aim" : "";
    const gives = other ? ` ${place(one, inputs)}${kind} gives ${figuresWords(other.figures, lines)}${against}.` : "";
    words.push(
      `Several steady states${range(several)}: which one the vessel runs at depends on how it came there. ${subject} the one that ${filled(contents)} runs to.${capital(gives)}`,
    );
  }
  if (swinging.length > 0) {
    words.push(
      `${swinging.some((o) => o.states.length > 1) ? "No steady state found is stable" : "The only steady state found is unstable"}${range(swinging)}: the vessel swings and does not settle, and these figures are not what it will give, not even its mean. See how far it swings: simulate with --duty and --transient.`,
    );
  }
  if (away.length > 0) {
    words.push(
      `The steady state that is followed is unstable${range(away)}: the vessel does not stay there, and these figures are not what it will give.${contents ? "" : " Say under `contents:` of the duty what the vessel holds, a trace where a trace is enough: then the state that it runs to is followed."}`,
    );
  }
  if (words.length > 0) {
    const [input] = inputs;
    words.push(
      input
        ? `All states over a range: simulate with --duty and --states "${input.name}=…".`
        : "All states: simulate with --duty; over a range of one input with --states.",
    );
  }
  const left = [...new Set(others.flatMap((o) => o.left))];
  if (left.length > 0) words.push(`Not searched for other steady states: ${left.join(", ")}.`);
  return words;
}

/** Of several points one at which another stable state misses the aim, else one with another stable state. */
function worst(several: readonly OtherStates[], aim: Aim | undefined): OtherStates {
  const stable = (o: OtherStates) => o.states.some((s) => !s.reached && s.stable !== false);
  const missing = (o: OtherStates) => o.states.some((s) => !s.reached && s.stable !== false && !meets(s, aim));
  // Where the followed state does not last, what counts is whether another can do.
  const instead = (o: OtherStates) =>
    o.states.some((s) => s.reached && s.stable === false) &&
    o.states.some((s) => !s.reached && s.stable && meets(s, aim));
  const better = aim && several.find(instead);
  if (better) return better;
  return (aim && several.find(missing)) ?? several.find(stable) ?? several[0];
}

function meets({ figures }: StateFigures, aim: Aim | undefined): boolean {
  if (!aim) return false;
  const off = figures[0].value - aim.target.value;
  const close = 1e-6 * (Math.abs(aim.target.value) || 1);
  return aim.sign === "=" ? Math.abs(off) <= close : aim.sign === "<=" ? off <= close : off >= -close;
}

function figuresWords(figures: readonly Figure[], lines: readonly Reported[]): string {
  return figures
    .flatMap((f, k) => {
      if (lines[k].what === "tracer-time" || lines[k].what === "time-beyond") return [];
      const share = ["conversion", "yield", "selectivity"].includes(lines[k].what);
      const unit: Unit = share ? { ...f.unit, name: "%", factor: 0.01 } : f.unit;
      return [`${f.name} ${f.why ?? formatQuantity(f.value, unit, 4)}`];
    })
    .join(", ");
}

const place = ({ at }: OtherStates, inputs: readonly Input[]): string =>
  inputs.length === 0
    ? ""
    : `at ${inputs.map((i, k) => `${i.name} = ${formatQuantity(at[k], i.unit, 4)}`).join(", ")} `;

/** " at feed.temperature = 300 K", " between …": where points that were looked at lie. */
function placesOf(list: readonly OtherStates[], inputs: readonly Input[]): string {
  if (inputs.length === 0) return "";
  if (inputs.length > 1) return ` at ${list.length} of the points looked at`;
  const [{ name, unit }] = inputs;
  const at = list.map((o) => o.at[0]);
  const [low, high] = [Math.min(...at), Math.max(...at)];
  if (low === high) return ` at ${name} = ${formatQuantity(low, unit, 4)}`;
  return ` at ${list.length} values of ${name} looked at, from ${formatQuantity(low, unit, 4)} to ${formatQuantity(high, unit, 4)}`;
}

/** What the vessel holds before anything happens. */
export const filled = (contents: Duty["contents"]): string =>
  contents ? "a vessel that holds the `contents` of the duty" : "a vessel filled with what is fed";

const capital = (text: string): string => text.replace(/^ ([a-z])/, (_, c: string) => ` ${c.toUpperCase()}`);

/** What a study has to tell of steady states beside those of its predictions, by duty and rival. */
export function studyStatesWords({ predictions, ranking }: StudyResult): string[] {
  const named = ranking.filter((r) => r.survives).length > 1;
  const first = predictions.filter((p, k) => predictions.findIndex((q) => q.states === p.states) === k);
  return first.flatMap(({ duty, rival, states }) => {
    const says = dutyStatesWords(states, duty).join(" ");
    return says === "" ? [] : [`${duty.title}${named ? ` (by '${rival.network.title}')` : ""}: ${says}`];
  });
}
