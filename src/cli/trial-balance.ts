import type { Plant } from "../compile/plant.js";
import type { Injection, Trial } from "../model/trial.js";
import type { Balance } from "../simulate/respond.js";
import { type AnyEngine, trace } from "../simulate/trace.js";
import { driveOf } from "../simulate/trial.js";
import { dimensionName, dimensions, times } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";

/**
 * The tracer balance of a whole trial at a time on its clock: what the injections put in beyond what the vessel was in
 * balance with before.
 * @returns undefined where the amount has no unit that a balance could be printed in
 */
export function trialBalance(
  plant: Plant,
  trial: Trial,
  until: number,
  engine: AnyEngine,
): { balance: Balance; unit: Unit } | undefined {
  const unit = amountUnit(plant, trial.injections[0]);
  if (!unit) return undefined;
  const sum = { injected: 0, left: 0, inside: 0 };
  for (const injection of trial.injections) {
    const entry = plant.entry.get(injection.at);
    const span = until - injection.start;
    if (entry === undefined || !(span > 0)) continue;
    const part = trace(plant, entry, span, engine).balance(driveOf(plant, injection).drive, span);
    sum.injected += part.injected;
    sum.left += part.left;
    sum.inside += part.inside;
  }
  const recovered = sum.left + sum.inside;
  const closure = sum.injected === 0 ? 0 : Math.abs((sum.injected - recovered) / sum.injected);
  return { balance: { ...sum, recovered, closure }, unit };
}

function amountUnit(plant: Plant, { form }: Injection): Unit | undefined {
  if (form.is === "pulse" && form.amount.unit) return form.amount.unit;
  const level =
    form.is === "step" ? form.level.dimension : form.is === "signal" ? form.table.valueUnit.dimension : undefined;
  if (!level) return undefined;
  const amount = level[0] === -3 ? times(level, dimensions.volume) : times(level, dimensions.time);
  return dimensionName(amount) === undefined ? undefined : plant.network.units.unitFor(amount);
}
