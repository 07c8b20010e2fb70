import type { Injection, Trial } from "../model/trial.js";
import type { Value } from "../model/value.js";
import type { Dimension } from "../units/dimension.js";
import { one, type Unit } from "../units/unit.js";

/** A number as a value of a document: SI, known exactly. */
const known = (si: number, dimension: Dimension, like: Value): Value => ({
  ...like,
  dimension,
  unit: one,
  uses: [],
  of: () => si,
  sd: undefined,
});

/** The same trial with the first injection's place fed by a step of 1 in the unit of its readings, from time 0 on. */
export function asStep(trial: Trial): Trial | undefined {
  const [first] = trial.injections;
  const [reading] = trial.readings;
  if (!first || !reading) return undefined;
  const like = first.form.is === "pulse" ? first.form.amount : first.form.is === "step" ? first.form.level : undefined;
  if (!like) return undefined;
  const level = known(1, reading.unit.dimension[0] === -3 ? reading.unit.dimension : [-3, 1, 0, 0, 0, 0, 0], like);
  const injection: Injection = { ...first, start: 0, lasting: 0, form: { is: "step", level, from: undefined } };
  const { contents: _, ...rest } = trial;
  return {
    ...rest,
    injections: [injection],
    readings: trial.readings.map((r) => ({ ...r, line: { delay: undefined, lag: undefined } })),
  };
}

const scaled = (value: Value, by: number): Value => ({
  ...value,
  of: (env) => by * value.of(env),
  sd: value.sd && ((env) => by * (value.sd?.(env) ?? 0)),
});

/** The same trial with so many times the tracer. */
export function withDose(trial: Trial, by: number): Trial {
  const injections = trial.injections.map((one): Injection => {
    const { form } = one;
    if (form.is === "pulse") return { ...one, form: { ...form, amount: scaled(form.amount, by) } };
    if (form.is !== "step") return one;
    const { level, from } = form;
    return { ...one, form: { ...form, level: scaled(level, by), from: from && scaled(from, by) } };
  });
  return { ...trial, injections };
}

/** The amount or level of the first injection, with its unit. */
export function doseOf({
  injections,
}: Trial): { readonly value: Value; readonly unit: Unit; readonly is: "pulse" | "step" } | undefined {
  const form = injections[0]?.form;
  if (form?.is === "pulse") return { value: form.amount, unit: form.amount.unit ?? one, is: "pulse" };
  return form?.is === "step" ? { value: form.level, unit: form.level.unit ?? one, is: "step" } : undefined;
}
