import type { Plant } from "../compile/plant.js";
import type { Trial } from "../model/trial.js";
import { putsOf } from "../simulate/puts.js";
import type { Balance } from "../simulate/respond.js";
import type { AnyEngine } from "../simulate/trace.js";
import { tracerPlant } from "../simulate/tracer-plant.js";
import { trialTracing } from "../simulate/trial-tracing.js";
import { inBasis, isLevel } from "../units/basis.js";
import { dimensionName, dimensions, times } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";

/**
 * The tracer balance of a whole trial at a time on its clock: what the injections put in beyond what the vessel was in
 * balance with before, and what it held at the start.
 * @returns undefined where the amount has no unit that a balance could be printed in, or where tracer decays or is lost
 */
export function trialBalance(
  liquid: Plant,
  trial: Trial,
  until: number,
  engine: AnyEngine,
): { balance: Balance; unit: Unit } | undefined {
  const plant = tracerPlant(liquid, trial.tracer);
  const unit = amountUnit(plant, trial);
  if (!unit || trial.tracer?.decay || trial.tracer?.loss) return undefined;
  const sum = { injected: 0, left: 0, inside: 0 };
  for (const put of putsOf(plant, trial)) {
    const { start, drive, still } = put;
    const span = until - start;
    if (!(span > 0)) continue;
    const part = trialTracing(plant, trial, put, span, engine).balance(drive, span);
    const held = still?.amount ?? 0;
    sum.injected += part.injected + held;
    sum.left += part.left;
    sum.inside += part.inside + held;
  }
  const recovered = sum.left + sum.inside;
  const closure = sum.injected === 0 ? 0 : Math.abs((sum.injected - recovered) / sum.injected);
  return { balance: { ...sum, recovered, closure }, unit };
}

function amountUnit(plant: Plant, { injections, contents }: Trial): Unit | undefined {
  const form = injections[0]?.form;
  if (form?.is === "pulse" && form.amount.unit) return form.amount.unit;
  const { basis } = plant.network;
  const level =
    form?.is === "step"
      ? form.level.dimension
      : form?.is === "signal"
        ? form.table.valueUnit.dimension
        : contents?.levels[0]?.level.dimension;
  if (!level) return undefined;
  const amount = isLevel(level) ? times(level, inBasis(dimensions.volume, basis)) : times(level, dimensions.time);
  return dimensionName(amount) === undefined ? undefined : plant.network.units.unitFor(amount);
}
