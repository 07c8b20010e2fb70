import type { Trial } from "../model/trial.js";
import type { Known } from "./figure.js";
import type { MomentsOptions } from "./result.js";
import type { StandardCurve } from "./standard-curve.js";
import { thresholds } from "./thresholds.js";

const limit = thresholds.across;

/** A trial to be held against others, and what is known of its day. */
export interface TrialOfDay {
  readonly trial: Trial;
  readonly options: MomentsOptions;
  /** What else was so on the day, in words, by name: constants that it set otherwise, and its `conditions`. */
  readonly conditions: ReadonlyMap<string, string>;
}

/** In what two trials differ: nothing (a repeat), the flow, how tracer was put in, or other conditions; several: not to be told apart. */
export type Contrast = "repeat" | "flow" | "dosing" | "conditions" | "several";

/** A curve that can be compared. */
export interface Member {
  readonly day: TrialOfDay;
  readonly curve: StandardCurve;
  readonly flow: Known | undefined;
  /** Its place among those that are compared. */
  readonly index: number;
}

/** Two of them. */
export interface Pair {
  /** The one with the smaller flow first. */
  readonly a: Member;
  readonly b: Member;
  readonly contrast: Contrast;
  readonly differs: readonly string[];
  readonly flowRatio: number | undefined;
}

/** In what two curves differ besides themselves. */
export function pairOf(one: Member, other: Member): Pair {
  const turned = (one.flow?.value ?? 0) > (other.flow?.value ?? 0);
  const [a, b] = turned ? [other, one] : [one, other];
  const flowRatio = a.flow && b.flow ? b.flow.value / a.flow.value : undefined;
  const flows = flowRatio === undefined || flowRatio > limit.flowSame;
  const told = flowRatio !== undefined && flowRatio >= limit.flowRatio;
  const dosing = [dosingOf(a.day.trial), dosingOf(b.day.trial)];
  const others = [...conditionsApart(a, b), ...feedsApart(a, b), ...tracerApart(a.day.trial, b.day.trial)];
  const differs = [
    ...(flows ? ["the flow"] : []),
    ...(dosing[0] === dosing[1] ? [] : [`${dosing[0]} against ${dosing[1]}`]),
    ...others,
  ];
  const sorts: Contrast[] = [
    ...(flows ? [told ? ("flow" as const) : ("several" as const)] : []),
    ...(dosing[0] === dosing[1] ? [] : ["dosing" as const]),
    ...(others.length > 0 ? ["conditions" as const] : []),
  ];
  return { a, b, contrast: sorts.length > 1 ? "several" : (sorts[0] ?? "repeat"), differs, flowRatio };
}

function dosingOf({ injections: [{ form }] }: Trial): string {
  if (form.is !== "step") return "a pulse";
  return (form.from?.of([]) ?? 0) > form.level.of([]) ? "a step down" : "a step up";
}

function conditionsApart({ day: { conditions: a } }: Member, { day: { conditions: b } }: Member): string[] {
  const names = new Set([...a.keys(), ...b.keys()]);
  return [...names].flatMap((name) =>
    a.get(name) === b.get(name) ? [] : [`${name} (${a.get(name) ?? "not said"}, ${b.get(name) ?? "not said"})`],
  );
}

/** Feeds that take other shares of the flow. */
function feedsApart({ day: a }: Member, { day: b }: Member): string[] {
  const shares = ({ options: { feeds } }: TrialOfDay): Map<string, number> => {
    const whole = [...(feeds?.values() ?? [])].reduce((sum, f) => sum + f, 0);
    return new Map([...(feeds ?? [])].map(([name, flow]) => [name, flow / whole]));
  };
  const [one, other] = [shares(a), shares(b)];
  const apart = [...one].some(([name, share]) => Math.abs(share - (other.get(name) ?? share)) > 0.05);
  return apart ? ["the shares of the feeds"] : [];
}

function tracerApart({ tracer: a, injections: [one] }: Trial, { tracer: b, injections: [other] }: Trial): string[] {
  const known = (t: Trial["tracer"]): string =>
    JSON.stringify([
      t?.follows?.of,
      (t?.retained ?? []).map(({ body, factor }) => [body, typeof factor === "number" ? factor : factor.name]),
    ]);
  return [
    ...(known(a) === known(b) ? [] : ["the tracer"]),
    ...(one.at === other.at ? [] : ["where the tracer went in"]),
  ];
}
