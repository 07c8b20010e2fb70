import type { AimResult, Stretch } from "../../study/aim.js";
import { formatQuantity } from "../../units/format.js";
import type { Unit } from "../../units/unit.js";
import { chance } from "../digits.js";
import { aimStatesWords } from "./states-words.js";

const digits = 4;

/** With signs as they are set. */
export const aimText = (text: string): string => text.replace(">=", "≥").replace("<=", "≤");

/** The answer to an aim in one to three sentences: where it is met, how surely, what cannot be. */
export function aimWords(found: AimResult): string[] {
  const { aim, range, sign, confidence, crossings, met, best, impossible, draws } = found;
  const { name, unit } = range.input;
  const say = (x: number): string => formatQuantity(x, unit, digits);
  const target = aimText(aim.text);
  const sure = confidence === undefined ? "" : ` in ${Number((100 * confidence).toPrecision(4))} % of the draws`;
  const said: string[] = [];
  if (sign === "=" ? crossings.length === 0 : met.length === 0) {
    const reason = best
      ? `the nearest is ${figureWords(found)} at ${name} = ${say(best.at)}`
      : "no vessel is possible anywhere there";
    said.push(`Infeasible: no ${name} from ${say(range.from)} to ${say(range.to)} gives ${target}${sure}; ${reason}.`);
  } else if (sign === "=") {
    const [one, ...more] = crossings;
    said.push(
      more.length === 0
        ? `${target} at ${name} = ${say(one.at)}.`
        : `${target} at ${crossings.length} values of ${name}: ${crossings.map((c) => say(c.at)).join(", ")}. Look at which of them is meant.`,
    );
  } else {
    said.push(`${target}${sure} ${whereWords(met, found, say)}.`);
  }
  if (confidence === undefined && crossings.length > 0 && crossings[0].share !== undefined) {
    const shares = [...new Set(crossings.map((c) => chance(c.share ?? Number.NaN)))].join(" and ");
    const side = aim.sign === "=" ? "is no worse than the aim" : "meets the aim";
    said.push(
      `At the middle values: of what is possible, ${shares} ${side} there. A confidence of 90 % adds a margin.`,
    );
  }
  const error = (crossings.length > 0 ? crossings : best ? [best] : []).map((c) => c.shareError ?? 0);
  if (Math.max(0, ...error) > 0) {
    const percent = Number((100 * Math.max(...error)).toPrecision(2));
    said.push(`The share is known to ± ${percent} % from ${draws} draws; more make it surer.`);
  }
  for (const { from, to, why } of impossible) {
    const place = from === to ? `at ${say(from)}` : `from ${say(from)} to ${say(to)}`;
    said.push(`Left out: ${name} ${place}: ${why}.`);
  }
  return [...said, ...aimStatesWords(found)];
}

function whereWords(met: readonly Stretch[], { range }: AimResult, say: (x: number) => string): string {
  const words = met.map(({ from, to }) => {
    const [low, high] = [from > range.from, to < range.to];
    if (!low && !high) return `anything from ${say(from)} to ${say(to)}`;
    if (!high) return `from ${say(from)} up`;
    return low ? `from ${say(from)} to ${say(to)}` : `up to ${say(to)}`;
  });
  return `where ${range.input.name} is ${words.join(", and ")} (looked at ${say(range.from)} to ${say(range.to)})`;
}

/** The best figure, or with a confidence what the draws keep there. */
function figureWords({ aim, best, confidence }: AimResult): string {
  if (!best) return "";
  const { figure, kept } = best;
  const percent: Unit = { ...figure.unit, name: "%", factor: 0.01 };
  const unit = ["conversion", "yield", "selectivity"].includes(aim.line.what) ? percent : figure.unit;
  if (confidence !== undefined && kept !== undefined && Number.isFinite(kept))
    return formatQuantity(kept, unit, digits);
  return figure.why ?? formatQuantity(figure.value, unit, digits);
}
