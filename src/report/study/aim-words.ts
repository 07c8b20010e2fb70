import type { AimResult, Stretch } from "../../study/aim.js";
import { formatQuantity } from "../../units/format.js";
import { fromUnit, inUnit, type Unit } from "../../units/unit.js";
import { chance } from "../digits.js";
import { jumpWords, washOutWords } from "./jump-words.js";
import { aimStatesWords } from "./states-words.js";

const digits = 4;

/** With signs as they are set. */
export const aimText = (text: string): string => text.replace(">=", "≥").replace("<=", "≤");

/** The answer to an aim in one to three sentences: where it is met, how surely, what cannot be. */
export function aimWords(found: AimResult): string[] {
  const {
    aim,
    range,
    sign,
    confidence,
    crossings,
    met,
    metByAll,
    metByStable,
    best,
    impossible,
    draws,
    jumps,
    washOuts,
  } = found;
  const { name, unit } = range.input;
  const say = (x: number): string => formatQuantity(x, unit, digits);
  const target = aimText(aim.text);
  const sure = confidence === undefined ? "" : ` in ${Number((100 * confidence).toPrecision(4))} % of the draws`;
  const said: string[] = [];
  if (sign === "=" ? crossings.length === 0 : met.length === 0) {
    const reason = best
      ? `the nearest is ${figureWords(found)} at ${name} = ${say(best.at)}`
      : "no vessel is possible anywhere there";
    const none = metByStable ? "At the steady state that is followed no" : "Infeasible: no";
    said.push(`${none} ${name} from ${say(range.from)} to ${say(range.to)} gives ${target}${sure}; ${reason}.`);
    if (metByStable) {
      said.push(
        `Where that state is unstable the vessel does not stay there: another, a stable one, meets the aim where ${name} is ${whereWords(metByStable, found)} (interpolated).`,
      );
    }
  } else if (sign === "=") {
    const [one, ...more] = crossings;
    said.push(
      more.length === 0
        ? `${target} at ${name} = ${say(one.at)}.`
        : `${target} at ${crossings.length} values of ${name}: ${crossings.map((c) => say(c.at)).join(", ")}. Look at which of them is meant.`,
    );
  } else {
    said.push(
      `${target}${sure} where ${name} is ${whereWords(met, found)} (looked at ${say(range.from)} to ${say(range.to)}).`,
    );
  }
  if (confidence === undefined && crossings.length > 0 && crossings[0].share !== undefined) {
    const shares = [...new Set(crossings.map((c) => chance(c.share ?? Number.NaN)))].join(" and ");
    const side = aim.sign === "=" ? "is no worse than the aim" : "meets the aim";
    said.push(
      `At the middle values: of what is possible, ${shares} ${side} there. A confidence of 90 % adds a margin.`,
    );
  }
  // Where no share is told there is none to be sure of.
  const nearest = best && confidence !== undefined ? [best] : [];
  const error = (crossings.length > 0 ? crossings : nearest).map((c) => c.shareError ?? 0);
  if (Math.max(0, ...error) > 0) {
    const percent = Number((100 * Math.max(...error)).toPrecision(2));
    said.push(`The share is known to ± ${percent} % from ${draws} draws; more make it surer.`);
  }
  for (const { from, to, why } of impossible) {
    const place = from === to ? `at ${say(from)}` : `from ${say(from)} to ${say(to)}`;
    said.push(`Left out: ${name} ${place}: ${why}.`);
  }
  const figureUnit = best?.figure.unit;
  if (figureUnit) said.push(...jumps.map((jump) => jumpWords(jump, range.input, [aim.line], [figureUnit])));
  said.push(...washOutWords(washOuts, range.input));
  said.push(...aimStatesWords(found));
  if (metByAll) {
    const where =
      metByAll.length > 0 ? `only where ${name} is ${whereWords(metByAll, found)}` : `nowhere in this range`;
    said.push(`Whichever of the steady states found the vessel runs at, the aim is met ${where}.`);
  }
  return said;
}

function whereWords(met: readonly Stretch[], { range }: AimResult): string {
  const { unit } = range.input;
  const words = met.map(({ from, to }) => {
    const [low, high] = [from > range.from, to < range.to];
    const [a, b] = [low ? inside(from, unit, 1) : from, high ? inside(to, unit, -1) : to];
    const narrow = a >= b;
    const say = (x: number, exact: number): string => formatQuantity(narrow ? exact : x, unit, narrow ? 8 : digits);
    if (!low && !high) return `anything from ${say(a, from)} to ${say(b, to)}`;
    if (!high) return `from ${say(a, from)} up`;
    return low ? `from ${say(a, from)} to ${say(b, to)}` : `up to ${say(b, to)}`;
  });
  return words.join(", and ");
}

/** The end of a stretch as it is printed, rounded into it: a value that is taken from the page must meet the aim. SI. */
function inside(si: number, unit: Unit, towards: 1 | -1): number {
  const x = inUnit(si, unit);
  const step = 10 ** (Math.floor(Math.log10(Math.abs(x))) - digits + 1);
  if (!Number.isFinite(step) || step === 0) return si;
  // What rounding alone has left beside a round number is not a digit more.
  const steps = towards > 0 ? Math.ceil(x / step - 1e-6) : Math.floor(x / step + 1e-6);
  return fromUnit(steps * step, unit);
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
